/**
 * What the timeline works on: one session as the server gives it (`SessionDocument`) and the editor's state over it.
 *
 * Times. The session axis is the **reference's clock**, epoch seconds. A recording's samples and its tags stand on
 * that recording's **own clock**; `onAxis` puts them on the axis. A tag therefore moves with its samples when the
 * offset moves. The reference's own clock is the axis (offset 0).
 */
import type { AnalysisPlan } from '../agreement/plan';
import type { TagKind, TagTreatment } from '../agreement/tag';
import type { ReadingWarning, Trace } from '../formats/recording';
import type { Role } from '../roles';
import type { ShiftEstimate } from '../signal/shift';

export type SessionState = 'imported' | 'aligned' | 'annotating' | 'in review' | 'returned' | 'reviewed';
export type TagStatus = 'proposed' | 'accepted' | 'crossed out' | 'removed';

/** One device's recording in the session. `number` 0 is the reference, 1 to 6 the wearables. */
export interface TimelineTrack {
	recordingId: string;
	number: number;
	role: 'reference' | 'wearable';
	name: string;
	shortName: string;
	firmware: string;
	fileName: string;
	warnings: ReadingWarning[];
	traces: Trace[];
}

export interface AlignmentState {
	/** Version on the server that this stands on; 0 = none yet. */
	version: number;
	offsetS: number;
	driftPpm: number;
	locked: boolean;
	method: 'proposed' | 'peak' | 'candidate' | 'hand';
	estimate: ShiftEstimate | null;
}

export interface Tag {
	id: string;
	/** Version on the server that this stands on; 0 = not yet saved. */
	version: number;
	recordingId: string;
	kind: string;
	/** [startS, endS) on the recording's own clock. */
	startS: number;
	endS: number;
	status: TagStatus;
	cleanedOverride: TagTreatment | null;
	evidence: string;
	note: string;
	authorInitials: string;
}

export interface ReviewRound {
	round: number;
	submittedBy: string;
	submittedAt: string;
	submitNote: string;
	reviewer: string | null;
	decision: 'approved' | 'returned' | null;
	comment: string;
	decidedAt: string | null;
	/** When it was taken back before anybody decided. */
	takenBackAt: string | null;
}

/** Everything the page needs of one session, except samples, which come apart as binary columns. */
export interface SessionDocument {
	sessionId: string;
	studyId: string;
	studySlug: string;
	studyTitle: string;
	code: string;
	title: string;
	activity: string | null;
	participantCode: string | null;
	state: SessionState;
	startsAtS: number;
	endsAtS: number;
	tracks: Omit<TimelineTrack, 'traces'>[];
	alignments: Record<string, AlignmentState>;
	tags: Tag[];
	kinds: TagKind[];
	plan: AnalysisPlan;
	reviews: ReviewRound[];
	/** What the signed-in person may do here, already including 'never own work' and 'locked while in review'. */
	can: {
		align: boolean;
		annotate: boolean;
		submit: boolean;
		review: boolean;
		/** Take it back from review before anybody has decided. */
		takeBack: boolean;
		/** Open it again after it was reviewed, with a reason. */
		reopen: boolean;
	};
	me: { initials: string; role: Role };
	/** Neighbours in the study's order, for going on without leaving the keys. */
	previousCode: string | null;
	nextCode: string | null;
}

/** What an offset says, apart from which version it is. */
export type AlignmentContent = Omit<AlignmentState, 'version'>;
/** What a tag says, apart from its identity and version. */
export type TagContent = Omit<Tag, 'id' | 'version'>;

/** A time of a recording's own clock on the session axis. Drift counts from the recording's first sample. */
export function onAxis(tS: number, alignment: Pick<AlignmentState, 'offsetS' | 'driftPpm'>, firstS: number): number {
	return tS + alignment.offsetS + alignment.driftPpm * 1e-6 * (tS - firstS);
}

/** The inverse of `onAxis`. */
export function onOwnClock(axisS: number, alignment: Pick<AlignmentState, 'offsetS' | 'driftPpm'>, firstS: number): number {
	const rate = 1 + alignment.driftPpm * 1e-6;
	return firstS + (axisS - alignment.offsetS - firstS) / rate;
}
