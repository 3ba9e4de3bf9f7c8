/** What one step of undo holds. */
import type { AlignmentContent, AlignmentState, Tag, TagContent } from './model';

/** The parts of the editor's state that are the session's own and are saved and undone. */
export interface EditedParts {
	alignments: Readonly<Record<string, AlignmentState>>;
	/** All tags, those crossed out or removed included. */
	tags: readonly Tag[];
}

/** One thing before and after. A tag that was not there is `null` before; putting that back removes the tag. */
export type Change =
	| { of: 'tag'; id: string; before: TagContent | null; after: TagContent }
	| { of: 'alignment'; recordingId: string; before: AlignmentContent | null; after: AlignmentContent };

export interface Step {
	/** What was done, as the undo button says it: `end +2 s`. */
	name: string;
	changes: Change[];
	/** What was held before, to be held again. */
	heldNumber: number | null;
	heldTagId: string | null;
	/** Steps of the same key close after one another become one: a row of nudges. Null = always its own step. */
	mergeKey: string | null;
	atMs: number;
}

export interface History {
	done: readonly Step[];
	undone: readonly Step[];
	/** Where the parts stood when a drag began; null when none is under way. */
	gesture: EditedParts | null;
	/** The step whose undoing has just been held back because somebody changed the same thing since. */
	warned: Step | null;
}

export const EMPTY_HISTORY: History = { done: [], undone: [], gesture: null, warned: null };
