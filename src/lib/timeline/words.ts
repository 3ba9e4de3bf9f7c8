/** Names of steps and sentences of refusal: what undo calls an act, and why a key did nothing. */
import type { TagKind } from '../agreement/tag';
import { clockTime, duration, signed } from '../text/figures';
import type { SessionDocument, Tag } from './model';
import { heldTrack, kindOf, spanOfTag, trackOf, type EditorState, type EditorTrack } from './state';

/** `1 Wrenna Loop 2`; the reference goes by its name alone. */
export const traceName = (track: Pick<EditorTrack, 'number' | 'name'>): string => (track.number === 0 ? track.name : `${track.number} ${track.name}`);
/** `1 Wrenna`, for names of steps. */
export const shortTraceName = (track: Pick<EditorTrack, 'number' | 'shortName'>): string =>
	track.number === 0 ? track.shortName : `${track.number} ${track.shortName}`;

/** Seconds with a sign and as few decimals as say it: `+2 s`, `−0.1 s`. */
export function signedSeconds(seconds: number): string {
	const rounded = Math.round(seconds * 100) / 100;
	const decimals = Number.isInteger(rounded) ? 0 : Number.isInteger(Math.round(rounded * 1000) / 100) ? 1 : 2;
	return `${signed(rounded, decimals)} s`;
}

/** `cadence lock` for use within a sentence. */
export const kindWord = (kind: Pick<TagKind, 'name'> | null, key: string): string => (kind?.name ?? key).toLowerCase();

/** One tag as a sentence: `Cadence lock on 1 Wrenna Loop 2, 07:50:44 to 07:52:08, 84 s, proposed.` */
export function tagInWords(state: EditorState, tag: Tag): string {
	const { fromS, toS } = spanOfTag(state, tag);
	const track = trackOf(state, tag.recordingId);
	const name = kindOf(state, tag.kind)?.name ?? tag.kind;
	const parts = [
		`${name}${track ? ` on ${traceName(track)}` : ''}`,
		`${clockTime(fromS)} to ${clockTime(toS)}`,
		duration(toS - fromS),
		...(tag.status === 'accepted' ? [] : [tag.status]),
		...(tag.note ? ['with a note'] : [])
	];
	return `${parts.join(', ')}.`;
}

type Can = keyof SessionDocument['can'];

/** Why the session cannot be changed in this way, or null when it can. */
export function closedBecause(document: SessionDocument, act: Can): string | null {
	if (document.can[act]) return null;
	const { state } = document;
	if (act === 'align' || act === 'annotate' || act === 'submit') {
		if (state === 'in review') return 'This session is in review. Nothing moves until it is decided or taken back.';
		if (state === 'reviewed') return 'This session is reviewed. Open it again, with a reason, to change it.';
		return 'Your role reads this session but does not change it. Ask an owner for the analyst role.';
	}
	if (act === 'review') {
		if (state !== 'in review') return 'There is nothing to decide: this session is not in review.';
		return 'You cannot decide on this one: it is your own work, or your role does not review.';
	}
	if (act === 'takeBack') return state === 'in review' ? 'An owner or analyst can take it back from review.' : 'This session is not in review.';
	return state === 'reviewed' ? 'An owner or analyst can open it again.' : 'This session is open.';
}

/** What is held, in a few words, for the head of the command list. */
export function heldInWords(state: EditorState): string {
	const track = heldTrack(state);
	const tag = state.tags.find((t) => t.id === state.heldTagId);
	if (tag) return `${kindWord(kindOf(state, tag.kind), tag.kind)}${track ? `, ${traceName(track)}` : ''}`;
	return track ? traceName(track) : 'nothing held';
}
