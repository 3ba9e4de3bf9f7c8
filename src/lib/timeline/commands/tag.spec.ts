import { describe, expect, it } from 'vitest';
import { alignment, after, session, sinceStart, START_S, tag } from '../testing/session-in-hand';
import type { EditorState } from '../state';
import { spanOfTag, standingTags } from '../state';
import { applyTransaction, beginGesture, endGesture, gestureBase } from '../transaction';
import { nudge } from './offset';
import { moveCursorTo } from './cursor';
import { draftBetween, moveEdge, setEdge, setKind, snapEdges } from './edge';
import { accept, crossOut, nextProposal, nextProposalOfKind, previousProposal } from './proposal';
import { redo, undo } from './session';
import { holdTag, letGo, openDetail, removeTag, setNote, toggleCleaned } from './tag';

const at = (s: number) => moveCursorTo(START_S + s);
const spans = (state: EditorState) => standingTags(state).map((t) => [t.kind, sinceStart(t.startS), sinceStart(t.endS)]);

describe('making a tag by keyboard', () => {
	it('E, move, E, letter: the tag lies on the held trace, on its own clock, and is held', () => {
		const state = after(session(), [at(100), setEdge, at(160), setEdge, setKind('cadence-lock')]);
		// 3 s of offset: 100 s on the axis is 97 s on the wearable's clock.
		expect(spans(state)).toEqual([['cadence-lock', 97, 157]]);
		expect(state.heldTagId).toBe(state.tags[0].id);
		expect(state.history.done.map((s) => s.name)).toEqual(['new cadence lock']);
	});

	it('the end may be set before the start, and the letter alone ends it at the cursor', () => {
		expect(spans(after(session(), [at(160), setEdge, at(100), setEdge, setKind('rest')]))).toEqual([['rest', 97, 157]]);
		expect(spans(after(session(), [at(100), setEdge, at(160), setKind('rest')]))).toEqual([['rest', 97, 157]]);
	});

	it('asks for the kind by its letters and Esc drops the tag, leaving nothing to undo', () => {
		const asked = after(session(), [draftBetween('ostrel', START_S + 10, START_S + 40)]);
		expect(asked.said?.text).toContain('C cadence lock');
		expect(asked.heldNumber).toBe(2);
		const dropped = after(asked, [letGo]);
		expect(dropped.draft).toBeNull();
		expect(dropped.tags).toHaveLength(0);
		expect(dropped.history.done).toHaveLength(0);
	});

	it('refuses a tag shorter than 2 s with a sentence, and a kind letter with nothing to give it to', () => {
		const short = after(session(), [at(100), setEdge, at(101), setEdge]);
		expect(short.tags).toHaveLength(0);
		expect(short.said?.text).toContain('at least 2 s');
		expect(after(session(), [setKind('rest')]).said?.text).toContain('hold a tag');
	});

	it('a tag moves with its samples when the offset moves: its own times stay', () => {
		const made = after(session(), [at(100), setEdge, at(160), setEdge, setKind('rest')]);
		const moved = after(made, [nudge(10)]);
		expect(spans(moved)).toEqual(spans(made));
		expect(sinceStart(spanOfTag(moved, moved.tags[0]).fromS)).toBe(110);
	});

	it('is refused in review, in words', () => {
		const closed = session({ state: 'in review', can: { ...session().document.can, annotate: false } });
		expect(after(closed, [setEdge]).said?.text).toContain('in review');
		expect(setEdge(closed)).toBe(false);
	});
});

describe('tags of one trace never overlap', () => {
	it('the newer trims the older, both in one step', () => {
		const state = after(session({ tags: [tag('old', 50, 120)] }), [at(103), setEdge, at(203), setEdge, setKind('rest')]);
		expect(spans(state)).toEqual([['cadence-lock', 50, 100], ['rest', 100, 200]]);
		expect(state.history.done).toHaveLength(1);
		expect(spans(after(state, [undo]))).toEqual([['cadence-lock', 50, 120]]);
		expect(spans(after(state, [undo, redo]))).toEqual([['cadence-lock', 50, 100], ['rest', 100, 200]]);
	});

	it('a newer one inside an older one cuts it in two; one that covers it removes it', () => {
		const inside = after(session({ tags: [tag('old', 50, 150)] }), [at(83), setEdge, at(103), setEdge, setKind('rest')]);
		expect(spans(inside).sort((a, b) => Number(a[1]) - Number(b[1]))).toEqual([['cadence-lock', 50, 80], ['rest', 80, 100], ['cadence-lock', 100, 150]]);
		expect(spans(after(inside, [undo]))).toEqual([['cadence-lock', 50, 150]]);
		const over = after(session({ tags: [tag('old', 50, 60)] }), [at(43), setEdge, at(103), setEdge, setKind('rest')]);
		expect(spans(over)).toEqual([['rest', 40, 100]]);
		expect(over.tags.find((t) => t.id === 'old')?.status).toBe('removed');
	});

	it('what trimming leaves of less than 2 s is removed', () => {
		const state = after(session({ tags: [tag('old', 50, 100)] }), [at(54.5), setEdge, at(203), setEdge, setKind('rest')]);
		expect(spans(state)).toEqual([['rest', 51.5, 200]]);
	});

	it('tags on other traces are left alone', () => {
		const state = after(session({ tags: [tag('other', 50, 120, { recordingId: 'ostrel' })] }), [at(53), setEdge, at(103), setEdge, setKind('rest')]);
		expect(standingTags(state)).toHaveLength(2);
		expect(state.tags.find((t) => t.id === 'other')).toMatchObject({ startS: START_S + 50, endS: START_S + 120 });
	});

	it('a proposal may lie over an accepted tag until it is accepted', () => {
		const both = session({ tags: [tag('old', 50, 120), tag('new', 100, 200, { status: 'proposed', kind: 'half-rate' })] });
		expect(spans(both)).toEqual([['cadence-lock', 50, 120], ['half-rate', 100, 200]]);
		const accepted = after(both, [holdTag('new'), accept]);
		expect(spans(accepted)).toEqual([['cadence-lock', 50, 100], ['half-rate', 100, 200]]);
		expect(spans(after(accepted, [undo]))).toEqual(spans(both));
	});

	it('dragging an edge over a neighbour and back leaves the neighbour whole', () => {
		const start = after(session({ tags: [tag('a', 50, 100), tag('b', 120, 180)] }), [holdTag('a')]);
		let state = beginGesture(start);
		for (const to of [130, 150, 111]) {
			const base = gestureBase(state);
			moveEdge('a', 'end', START_S + to + 3)(base, (t) => (state = applyTransaction(base, t, 0)));
		}
		const kept = endGesture(state, 'end +11 s', 0);
		expect(spans(kept)).toEqual([['cadence-lock', 50, 111], ['cadence-lock', 120, 180]]);
		expect(kept.history.done[0].changes).toHaveLength(1);
	});
});

describe('edges of a held tag', () => {
	it('E moves the nearer edge to the cursor and the step says by how much', () => {
		const state = after(session({ tags: [tag('a', 50, 100)] }), [holdTag('a'), at(105), setEdge]);
		expect(spans(state)).toEqual([['cadence-lock', 50, 102]]);
		expect(state.history.done.at(-1)?.name).toBe('end +2 s');
		expect(after(state, [at(50), setEdge]).history.done.at(-1)?.name).toBe('start −3 s');
	});

	it('Shift+E snaps to the edge of a tag on another trace, or says that there is nothing near', () => {
		const near = session({ tags: [tag('a', 50, 100), tag('b', 57, 98, { recordingId: 'ostrel' })] });
		// On the axis: a is 53 to 103, b is 57 to 98.
		expect(spans(after(near, [holdTag('a'), snapEdges]))[0]).toEqual(['cadence-lock', 54, 95]);
		expect(after(session({ tags: [tag('a', 250, 300)] }), [holdTag('a'), snapEdges]).said?.text).toContain('Nothing to snap to');
	});
});

describe('proposals', () => {
	const proposals = () =>
		session({
			tags: [
				tag('p1', 50, 60, { status: 'proposed' }),
				tag('p2', 200, 220, { status: 'proposed', kind: 'dropout', recordingId: 'ostrel' }),
				tag('p3', 400, 420, { status: 'proposed' }),
				tag('done', 300, 320)
			]
		});

	it('N goes from the cursor through all traces, holds trace and tag, and goes on from the start in words', () => {
		let state = after(proposals(), [at(100), nextProposal]);
		expect(state.heldTagId).toBe('p2');
		expect(state.heldNumber).toBe(2);
		expect(state.said?.text).toContain('Dropout on 2 Ostrel Band');
		state = after(state, [nextProposal, nextProposal]);
		expect(state.heldTagId).toBe('p1');
		expect(state.said?.text).toContain('From the start again.');
		expect(after(state, [previousProposal]).heldTagId).toBe('p3');
	});

	it('with Shift it keeps to the held kind', () => {
		const state = after(proposals(), [holdTag('p1'), nextProposalOfKind]);
		expect(state.heldTagId).toBe('p3');
		expect(after(proposals(), [nextProposalOfKind]).said?.text).toContain('Hold a tag first');
	});

	it('crossing out lets go, says what is left, and N goes on from there', () => {
		const state = after(proposals(), [at(0), nextProposal, crossOut]);
		expect(state.tags.find((t) => t.id === 'p1')?.status).toBe('crossed out');
		expect(state.said?.text).toBe('Crossed out. 2 proposals left.');
		expect(after(state, [nextProposal]).heldTagId).toBe('p2');
		expect(after(state, [undo]).heldTagId).toBe('p1');
	});

	it('A on an accepted tag and with nothing held says why nothing happens', () => {
		expect(after(proposals(), [holdTag('done'), accept]).said?.text).toContain('accepted already');
		expect(after(proposals(), [accept]).said?.text).toContain('N goes to the next');
	});
});

describe('the held tag', () => {
	it('I goes against the plan and back to it: the tag keeps no word of its own when it agrees with the plan', () => {
		const held = after(session({ tags: [tag('a', 50, 100)] }), [holdTag('a')]);
		const inside = after(held, [toggleCleaned]);
		expect(inside.tags[0].cleanedOverride).toBe('in');
		expect(after(inside, [toggleCleaned]).tags[0].cleanedOverride).toBeNull();
		const rest = after(session({ tags: [tag('a', 50, 100, { kind: 'rest' })] }), [holdTag('a'), toggleCleaned]);
		expect(rest.tags[0].cleanedOverride).toBe('out');
	});

	it('a fault of the reference cannot be talked back into an analysis', () => {
		const state = session({ tags: [tag('a', 50, 100, { recordingId: 'halden', kind: 'dropout' })] });
		const tried = after(state, [holdTag('a'), toggleCleaned]);
		expect(tried.tags[0].cleanedOverride).toBeNull();
		expect(tried.said?.text).toContain('both analyses');
	});

	it('Delete removes, undo brings it back held, with its note', () => {
		const removed = after(session({ tags: [tag('a', 50, 100)] }), [holdTag('a'), setNote('a', 'loose strap'), removeTag]);
		expect(standingTags(removed)).toHaveLength(0);
		const back = after(removed, [undo]);
		expect(standingTags(back)[0].note).toBe('loose strap');
		expect(back.heldTagId).toBe('a');
		expect(after(removed, [undo, undo]).tags[0].note).toBe('');
	});

	it('Enter holds the tag under the cursor, then opens its detail; Esc closes, lets go, and then says so', () => {
		const held = after(session({ tags: [tag('a', 50, 100)] }), [at(60), openDetail]);
		expect(held.heldTagId).toBe('a');
		const open = after(held, [openDetail]);
		expect(open.asking).toEqual({ what: 'detail', tagId: 'a' });
		const closed = after(open, [letGo]);
		expect([closed.asking, closed.heldTagId]).toEqual([null, 'a']);
		expect(after(closed, [letGo]).heldTagId).toBeNull();
		expect(after(closed, [letGo, letGo]).said?.text).toContain('Tab leaves the bench');
	});

	it('changes its kind by letter, and an override that was set against the old kind’s rule goes', () => {
		const state = after(session({ tags: [tag('a', 50, 100, { cleanedOverride: 'in' })] }), [holdTag('a'), setKind('half-rate')]);
		expect(state.tags[0]).toMatchObject({ kind: 'half-rate', cleanedOverride: null });
		expect(state.history.done.at(-1)?.name).toBe('kind half-rate');
	});

	it('stands where its recording says while no offset is known: the clock is taken as the reference’s', () => {
		const state = session({ alignments: { ostrel: alignment(0) }, tags: [tag('a', 50, 100)] });
		expect(sinceStart(spanOfTag(state, state.tags[0]).fromS)).toBe(50);
	});
});
