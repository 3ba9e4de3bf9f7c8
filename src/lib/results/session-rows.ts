/** What the study page shows of each session: how far it has come, and how far each wearable was off. */
export interface WearableCell {
	number: number;
	/** `not worn`: no recording of this device in the session. */
	state: 'not worn' | 'no reference' | 'not aligned' | 'unsure' | 'aligned';
	/** Progress ticks done (0 to 4), whether the next is under way. */
	done: number;
	underWay: boolean;
	/** Words for a state that needs eyes. */
	words: string | null;
	/** Mean difference per time bucket, bpm; null = no pair there. */
	strip: (number | null)[];
	/** Primary bias of the session, bpm; null without pairs. */
	biasBpm: number | null;
}

export interface SessionRow {
	code: string;
	title: string;
	activity: string | null;
	participantCode: string | null;
	startsAt: string;
	minutes: number;
	state: 'imported' | 'aligned' | 'annotating' | 'in review' | 'returned' | 'reviewed';
	/** Share of the session's time with a reference reading, 0 to 1; null without reference. */
	referenceCoverage: number | null;
	cells: WearableCell[];
	annotator: string | null;
	reviewer: string | null;
	proposals: number;
	next: { words: string; done: boolean };
}

/** The four stages by which sessions are counted and filtered, in the order of the work. */
export const STAGES = ['to align', 'to annotate', 'to review', 'reviewed'] as const;
export type Stage = (typeof STAGES)[number];

/** Stage of a session: what has to be done next. */
export function stageOf(state: SessionRow['state']): Stage {
	switch (state) {
		case 'imported':
			return 'to align';
		case 'aligned':
		case 'annotating':
		case 'returned':
			return 'to annotate';
		case 'in review':
			return 'to review';
		case 'reviewed':
			return 'reviewed';
	}
}

/** Progress ticks of a session: imported, aligned, annotated, reviewed. */
export function progressOf(state: SessionRow['state']): { done: number; underWay: boolean } {
	switch (state) {
		case 'imported':
			return { done: 1, underWay: false };
		case 'aligned':
			return { done: 2, underWay: false };
		case 'annotating':
		case 'returned':
			return { done: 2, underWay: true };
		case 'in review':
			return { done: 3, underWay: false };
		case 'reviewed':
			return { done: 4, underWay: false };
	}
}
