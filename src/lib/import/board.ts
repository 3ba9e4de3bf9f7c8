/** What the import page shows, as the server gives it. */
import type { ReadingWarning } from '../formats/recording';
import type { SessionState } from '../timeline/model';
import type { ImportQuestion } from './question';

interface BoardDevice {
	modelId: string;
	/** 0 is the reference, 1 to 6 the wearables. */
	number: number;
	name: string;
	shortName: string;
	role: 'reference' | 'wearable';
}

type UploadState = 'waiting' | 'reading' | 'asking' | 'ready' | 'filed' | 'refused';

export interface BoardFile {
	uploadId: string;
	fileName: string;
	state: UploadState;
	/** Share of the way in, 0 to 1, in quarters: kept, being read, read, in its session. */
	progress: number;
	messageCode: string | null;
	message: string | null;
	question: ImportQuestion | null;
	uploadedBy: string;
	/** Null until it is read. */
	recording: BoardRecording | null;
}

interface BoardRecording {
	recordingId: string;
	deviceModelId: string | null;
	firmware: string | null;
	/** Epoch seconds on the file's own clock. */
	startS: number;
	endS: number;
	warnings: ReadingWarning[];
	/** The newest offset, s, or null while it is searched or there is no reference. */
	offset: { offsetS: number; stands: boolean; reason: string } | null;
}

export interface BoardSession {
	sessionId: string;
	code: string;
	state: SessionState;
	participantId: string | null;
	participantCode: string | null;
	activity: string | null;
	startS: number;
	endS: number;
	hasReference: boolean;
	files: BoardFile[];
}

export interface ImportBoard {
	devices: BoardDevice[];
	participants: { participantId: string; code: string }[];
	activities: string[];
	/** Newest first: what was just dropped stands on top. */
	sessions: BoardSession[];
	/** Files on their way in, or asking, that are in no session yet. */
	loose: BoardFile[];
	/** Refused files and duplicates of the last days, newest first. */
	leftOut: BoardFile[];
	/** Files that the background work is at. */
	underWay: number;
	/** Sessions that are not shown because newer ones fill the page. */
	olderSessions: number;
	may: { upload: boolean; sort: boolean; addDevices: boolean };
}
