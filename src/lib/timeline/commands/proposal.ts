/** Proposals: from one to the next, and what becomes of each. */
import type { Tag } from '../model';
import { heldTag, kindOf, spanOfTag, type EditorState } from '../state';
import { putTag } from '../tag-rules';
import { change, refuse, show, type Command } from '../transaction';
import { closedBecause, kindWord, tagInWords } from '../words';
import { holding } from './tag';

interface Placed {
	tag: Tag;
	fromS: number;
}

/** Proposals by their start on the axis. */
function proposalsInOrder(state: EditorState): Placed[] {
	return state.tags
		.filter((t) => t.status === 'proposed')
		.map((tag) => ({ tag, fromS: spanOfTag(state, tag).fromS }))
		.sort((a, b) => a.fromS - b.fromS || a.tag.id.localeCompare(b.tag.id));
}

/**
 * N, B: holds the next (or the one before) of the proposals of all traces, counted from the held one or from the
 * cursor; past the last it goes on at the first and says so. With Shift only those of the held kind.
 */
const stepProposal =
	(direction: 1 | -1, sameKind: boolean): Command =>
	(state, dispatch) => {
		const held = heldTag(state);
		const kind = sameKind ? held?.kind : undefined;
		if (sameKind && !kind) return refuse(dispatch, 'Hold a tag first: with Shift, N and B go to proposals of its kind.');
		const all = proposalsInOrder(state).filter((p) => kind === undefined || p.tag.kind === kind);
		const others = all.filter((p) => p.tag.id !== held?.id);
		if (others.length === 0) {
			if (all.length > 0) return refuse(dispatch, 'This is the only proposal left.');
			return refuse(dispatch, kind === undefined ? 'There are no proposals left.' : `There are no proposals of ${kindWord(kindOf(state, kind), kind)} left.`);
		}
		const from = held ? spanOfTag(state, held).fromS : state.cursorS;
		const order = (p: Placed) => p.fromS - from || (held ? p.tag.id.localeCompare(held.id) : direction);
		const isBeyond = (p: Placed) => order(p) * direction > 0;
		const beyond = others.filter(isBeyond);
		const next = direction > 0 ? (beyond[0] ?? others[0]) : (beyond.at(-1) ?? others[others.length - 1]);
		const around = beyond.length === 0 ? (direction > 0 ? 'From the start again. ' : 'From the end again. ') : '';
		return show(dispatch, { ...holding(state, next.tag), cursorS: spanOfTag(state, next.tag).fromS }, around + tagInWords(state, next.tag));
	};
export const nextProposal = stepProposal(1, false);
export const previousProposal = stepProposal(-1, false);
export const nextProposalOfKind = stepProposal(1, true);
export const previousProposalOfKind = stepProposal(-1, true);

/** A, X: settles the held proposal. Accepted, it trims what it overlaps; crossed out, it is kept but stands nowhere. */
const settle =
	(status: 'accepted' | 'crossed out'): Command =>
	(state, dispatch) => {
		const closed = closedBecause(state.document, 'annotate');
		if (closed) return refuse(dispatch, closed);
		const tag = heldTag(state);
		if (!tag) return refuse(dispatch, 'Hold a proposal first: N goes to the next one.');
		if (tag.status !== 'proposed') return refuse(dispatch, status === 'accepted' ? 'This tag is accepted already.' : 'This tag is no proposal. Delete removes it.');
		const word = kindWord(kindOf(state, tag.kind), tag.kind);
		const left = state.tags.filter((t) => t.status === 'proposed').length - 1;
		const say = `${status === 'accepted' ? 'Accepted' : 'Crossed out'}. ${left === 0 ? 'No proposals left.' : left === 1 ? '1 proposal left.' : `${left} proposals left.`}`;
		return change(
			dispatch,
			`${status === 'accepted' ? 'accept' : 'cross out'} ${word}`,
			{ tags: putTag(state.tags, { ...tag, status, authorInitials: state.document.me.initials }), heldTagId: status === 'accepted' ? tag.id : null },
			{ say }
		);
	};
export const accept = settle('accepted');
export const crossOut = settle('crossed out');
