/**
 * Undo and redo, made from what changed and not from how: a step keeps the changes between two states and their
 * name. Steps survive a colleague's changes in between: what was changed since is noticed, not overwritten unseen.
 */
import type { AlignmentContent, AlignmentState, Tag, TagContent } from './model';
import type { EditorState } from './state';
import type { Change, EditedParts, History, Step } from './step';

/** Nudges no further apart than this become one step, ms. */
const MERGE_WITHIN_MS = 1500;

export const tagContent = ({ recordingId, kind, startS, endS, status, cleanedOverride, evidence, note, authorInitials }: Tag): TagContent => ({
	recordingId,
	kind,
	startS,
	endS,
	status,
	cleanedOverride,
	evidence,
	note,
	authorInitials
});
export const alignmentContent = ({ offsetS, driftPpm, locked, method, estimate }: AlignmentState): AlignmentContent => ({
	offsetS,
	driftPpm,
	locked,
	method,
	estimate
});

/** What differs between two states of the edited parts. */
export function changesBetween(before: EditedParts, after: EditedParts): Change[] {
	const changes: Change[] = [];
	if (before.alignments !== after.alignments) {
		for (const [recordingId, now] of Object.entries(after.alignments)) {
			const old = Object.hasOwn(before.alignments, recordingId) ? before.alignments[recordingId] : null;
			if (old === now || (old && sameContent(alignmentContent(old), alignmentContent(now)))) continue;
			changes.push({ of: 'alignment', recordingId, before: old && alignmentContent(old), after: alignmentContent(now) });
		}
	}
	if (before.tags !== after.tags) {
		const old = new Map(before.tags.map((t) => [t.id, t]));
		for (const now of after.tags) {
			const was = old.get(now.id) ?? null;
			if (was === now || (was && sameContent(tagContent(was), tagContent(now)))) continue;
			changes.push({ of: 'tag', id: now.id, before: was && tagContent(was), after: tagContent(now) });
		}
	}
	return changes;
}

/** Flat objects of plain values; an estimate inside is compared by identity. */
function sameContent(a: object, b: object): boolean {
	const left = Object.entries(a);
	const right = new Map(Object.entries(b));
	return left.length === right.size && left.every(([key, value]) => Object.is(right.get(key), value));
}

/**
 * What a change sets on one side. Where nothing stood before, a tag becomes removed and an offset goes to 0 by hand:
 * what has been stored cannot vanish.
 */
function sideOfTag(change: Change & { of: 'tag' }, side: 'before' | 'after'): TagContent {
	return change[side] ?? { ...change.after, status: 'removed' };
}
function sideOfAlignment(change: Change & { of: 'alignment' }, side: 'before' | 'after'): AlignmentContent {
	return change[side] ?? { offsetS: 0, driftPpm: 0, locked: false, method: 'hand', estimate: change.after.estimate };
}

/** Sets everything that the changes touch to its `before` or `after`. */
export function setChanged(parts: EditedParts, changes: readonly Change[], side: 'before' | 'after'): EditedParts {
	let { alignments, tags } = parts;
	const byTag = new Map<string, TagContent>();
	for (const change of changes) {
		if (change.of === 'tag') byTag.set(change.id, sideOfTag(change, side));
		else {
			const version = Object.hasOwn(alignments, change.recordingId) ? alignments[change.recordingId].version : 0;
			alignments = { ...alignments, [change.recordingId]: { version, ...sideOfAlignment(change, side) } };
		}
	}
	if (byTag.size > 0) {
		tags = tags.map((tag) => {
			const content = byTag.get(tag.id);
			if (!content) return tag;
			byTag.delete(tag.id);
			return { id: tag.id, version: tag.version, ...content };
		});
		for (const [id, content] of byTag) tags = [...tags, { id, version: 0, ...content }];
	}
	return { alignments, tags };
}

/** Has anything that a step set been changed since by something that is no step: a colleague's version taken over? */
const changedSince = (parts: EditedParts, changes: readonly Change[], side: 'before' | 'after'): boolean =>
	changesBetween(setChanged(parts, changes, side), parts).length > 0;

/** The history after what happened between two states; as it was when nothing changed. */
export function recordStep(
	before: EditorState,
	after: EditorState,
	step: { name: string; mergeKey: string | null; nameMerged?: (changes: Change[]) => string },
	atMs: number
): History {
	const { history } = after;
	const changes = changesBetween(before, after);
	if (changes.length === 0) return history;
	const last = history.done.at(-1);
	if (last && step.mergeKey !== null && last.mergeKey === step.mergeKey && atMs - last.atMs <= MERGE_WITHIN_MS && history.undone.length === 0) {
		const merged = changesBetween(setChanged(before, last.changes, 'before'), after);
		const done = history.done.slice(0, -1);
		if (merged.length === 0) return { ...history, done, warned: null };
		return { ...history, done: [...done, { ...last, name: step.nameMerged?.(merged) ?? step.name, changes: merged, atMs }], warned: null };
	}
	const { heldNumber, heldTagId } = before;
	return { ...history, done: [...history.done, { name: step.name, changes, heldNumber, heldTagId, mergeKey: step.mergeKey, atMs }], undone: [], warned: null };
}

export type Turn = { ok: true; state: EditorState; step: Step } | { ok: false; state: EditorState; why: 'nothing' | 'changed since' };

/** Takes the last step back. When somebody changed the same thing since, the first call only says so; the second does it. */
export function stepBack(state: EditorState): Turn {
	const { history } = state;
	const step = history.done.at(-1);
	if (!step) return { ok: false, state, why: 'nothing' };
	if (changedSince(state, step.changes, 'after') && history.warned !== step)
		return { ok: false, state: { ...state, history: { ...history, warned: step } }, why: 'changed since' };
	return {
		ok: true,
		step,
		state: {
			...state,
			...setChanged(state, step.changes, 'before'),
			heldNumber: step.heldNumber,
			heldTagId: step.heldTagId,
			history: { ...history, done: history.done.slice(0, -1), undone: [...history.undone, step], warned: null }
		}
	};
}

/** Does the step that was taken back last again. */
export function stepForward(state: EditorState): Turn {
	const { history } = state;
	const step = history.undone.at(-1);
	if (!step) return { ok: false, state, why: 'nothing' };
	if (changedSince(state, step.changes, 'before') && history.warned !== step)
		return { ok: false, state: { ...state, history: { ...history, warned: step } }, why: 'changed since' };
	const made = step.changes.find((c) => c.of === 'tag' && c.before === null);
	return {
		ok: true,
		step,
		state: {
			...state,
			...setChanged(state, step.changes, 'after'),
			heldTagId: made?.of === 'tag' ? made.id : state.heldTagId,
			history: { ...history, done: [...history.done, { ...step, mergeKey: null }], undone: history.undone.slice(0, -1), warned: null }
		}
	};
}
