/**
 * The invented scenario: the Bramling Bench test house tries three wearables against its ECG strap in the autumn.
 * People, devices and places exist nowhere else; every reading comes from the project's own simulator.
 */
import type { Activity } from '../../lib/simulate';
import type { Role } from '../../lib/roles';
import type { SessionState } from '../../lib/timeline/model';

export const TEAM = 'Bramling Bench';

export interface Person {
	name: string;
	email: string;
	initials: string;
	role: Role;
}

export const PEOPLE: Person[] = [
	{ name: 'Rowan Tarn', email: 'rt@bramling.example', initials: 'RT', role: 'owner' },
	{ name: 'Kit Marlow', email: 'km@bramling.example', initials: 'KM', role: 'analyst' },
	{ name: 'Sable Orrin', email: 'so@bramling.example', initials: 'SO', role: 'reviewer' },
	{ name: 'Juno Aldery', email: 'ja@bramling.example', initials: 'JA', role: 'contributor' },
	{ name: 'Linnet Vane', email: 'lv@bramling.example', initials: 'LV', role: 'reader' }
];

/** Wearers. P08 is the contributor's own code. */
export const WEARERS: { code: string; initials: string | null; restBpm: number; maxBpm: number }[] = [
	{ code: 'P02', initials: null, restBpm: 62, maxBpm: 181 },
	{ code: 'P03', initials: null, restBpm: 52, maxBpm: 190 },
	{ code: 'P08', initials: 'JA', restBpm: 57, maxBpm: 186 },
	{ code: 'P11', initials: null, restBpm: 66, maxBpm: 177 }
];

export const STUDY = {
	title: 'Autumn trail study',
	question: 'How closely do three wearables follow an ECG strap at the row, on hills, with kettlebells and on the indoor bike?'
};

/** The study's activities, and what the simulator does for each. */
export const STUDY_ACTIVITIES: { name: string; simulated: Activity; inFile: string; stem: string }[] = [
	{ name: 'Rowing ergometer', simulated: 'rowing', inFile: 'rowing', stem: 'row' },
	{ name: 'Hill running', simulated: 'hill-run', inFile: 'running', stem: 'hill' },
	{ name: 'Kettlebell circuit', simulated: 'strength', inFile: 'training', stem: 'kettlebell' },
	{ name: 'Indoor cycling', simulated: 'ride-indoor', inFile: 'cycling', stem: 'bike' }
];

export interface DemoSession {
	seed: number;
	activity: string;
	wearer: string;
	/** Start, UTC. */
	start: string;
	minutes: number;
	/** Wearables on the wearer; all three when left out. */
	worn?: number[];
	withoutReference?: boolean;
	/** The strap's first minutes are spoilt. */
	strapFault?: boolean;
	/** Wearable whose export says nothing of its origin, so that the import has to ask. */
	anonymous?: number;
	uploadedBy: string;
	/** How far the work on it has come. */
	state: SessionState;
	annotatedBy?: 'RT' | 'KM';
	reviewedBy?: 'RT' | 'KM' | 'SO';
}

const ROW = 'Rowing ergometer';
const HILL = 'Hill running';
const BELL = 'Kettlebell circuit';
const BIKE = 'Indoor cycling';

/** In order of time: S01 to S24. */
export const SESSIONS: DemoSession[] = [
	{ seed: 101, activity: ROW, wearer: 'P03', start: '2026-10-05T06:31', minutes: 38, uploadedBy: 'RT', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'SO' },
	{ seed: 102, activity: HILL, wearer: 'P08', start: '2026-10-06T07:12', minutes: 41, uploadedBy: 'JA', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'RT' },
	{ seed: 103, activity: BELL, wearer: 'P03', start: '2026-10-07T17:48', minutes: 33, uploadedBy: 'RT', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'KM' },
	{ seed: 104, activity: BIKE, wearer: 'P11', start: '2026-10-08T18:02', minutes: 46, uploadedBy: 'KM', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'SO' },
	{ seed: 105, activity: ROW, wearer: 'P08', start: '2026-10-10T06:10', minutes: 44, uploadedBy: 'JA', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'SO' },
	{ seed: 106, activity: HILL, wearer: 'P02', start: '2026-10-12T06:25', minutes: 37, uploadedBy: 'KM', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'KM' },
	{ seed: 107, activity: HILL, wearer: 'P03', start: '2026-10-14T07:31', minutes: 44, uploadedBy: 'RT', state: 'annotating', annotatedBy: 'RT' },
	{ seed: 108, activity: BELL, wearer: 'P11', start: '2026-10-15T18:02', minutes: 36, uploadedBy: 'KM', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'RT', strapFault: true },
	{ seed: 122, activity: BIKE, wearer: 'P08', start: '2026-10-16T17:20', minutes: 41, uploadedBy: 'JA', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'KM' },
	{ seed: 110, activity: ROW, wearer: 'P02', start: '2026-10-19T06:05', minutes: 35, worn: [1, 2], uploadedBy: 'RT', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'SO' },
	{ seed: 111, activity: BELL, wearer: 'P08', start: '2026-10-21T18:15', minutes: 30, uploadedBy: 'JA', state: 'reviewed', annotatedBy: 'RT', reviewedBy: 'SO' },
	{ seed: 112, activity: BIKE, wearer: 'P03', start: '2026-10-23T06:40', minutes: 52, uploadedBy: 'RT', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'RT' },
	{ seed: 113, activity: HILL, wearer: 'P11', start: '2026-10-26T07:20', minutes: 42, uploadedBy: 'KM', state: 'reviewed', annotatedBy: 'KM', reviewedBy: 'SO', strapFault: true },
	{ seed: 114, activity: ROW, wearer: 'P11', start: '2026-10-28T06:30', minutes: 40, uploadedBy: 'KM', state: 'in review', annotatedBy: 'KM' },
	{ seed: 115, activity: BIKE, wearer: 'P02', start: '2026-10-30T17:45', minutes: 39, uploadedBy: 'RT', state: 'in review', annotatedBy: 'RT' },
	{ seed: 116, activity: HILL, wearer: 'P08', start: '2026-11-02T07:05', minutes: 48, uploadedBy: 'JA', state: 'in review', annotatedBy: 'RT' },
	{ seed: 117, activity: BELL, wearer: 'P02', start: '2026-11-04T18:20', minutes: 34, uploadedBy: 'KM', state: 'returned', annotatedBy: 'KM', reviewedBy: 'SO' },
	{ seed: 118, activity: ROW, wearer: 'P03', start: '2026-11-06T06:35', minutes: 45, uploadedBy: 'RT', state: 'annotating', annotatedBy: 'KM' },
	{ seed: 119, activity: BIKE, wearer: 'P11', start: '2026-11-09T18:10', minutes: 50, uploadedBy: 'KM', state: 'aligned' },
	{ seed: 120, activity: HILL, wearer: 'P02', start: '2026-11-11T06:50', minutes: 40, uploadedBy: 'RT', state: 'aligned' },
	{ seed: 121, activity: BELL, wearer: 'P03', start: '2026-11-13T17:40', minutes: 32, uploadedBy: 'RT', state: 'aligned' },
	{ seed: 109, activity: BIKE, wearer: 'P08', start: '2026-11-16T17:30', minutes: 41, uploadedBy: 'JA', state: 'imported' },
	{ seed: 123, activity: HILL, wearer: 'P02', start: '2026-11-17T06:10', minutes: 42, worn: [1, 3], withoutReference: true, uploadedBy: 'RT', state: 'imported' },
	{ seed: 124, activity: ROW, wearer: 'P11', start: '2026-11-18T06:15', minutes: 37, anonymous: 2, uploadedBy: 'KM', state: 'aligned' }
];
