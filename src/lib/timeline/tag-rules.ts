/**
 * Rules of tags. Accepted tags of one recording never overlap: the one that was made or changed last trims the others.
 * A proposal is a question and not yet a statement, so it may lie over accepted tags and over other proposals; once
 * accepted it trims like any other. No tag is shorter than 2 s: what trimming leaves of less than that is removed.
 */
import { sideBlamed, treatmentOf, type AnalysisPlan } from '../agreement';
import type { TagKind } from '../agreement/tag';
import type { Tag } from './model';
import { SHORTEST_TAG_S } from './state';

/** Slack for sums of floating point when a length is compared with the shortest, s. */
const SLACK_S = 1e-6;
export const longEnough = (startS: number, endS: number): boolean => endS - startS >= SHORTEST_TAG_S - SLACK_S;

/** A tag's lasting identity, made here so that a tag can be sent twice and is kept once (UUID, version 4). */
export function newTagId(): string {
	const bytes = crypto.getRandomValues(new Uint8Array(16));
	bytes[6] = (bytes[6] & 0x0f) | 0x40;
	bytes[8] = (bytes[8] & 0x3f) | 0x80;
	const hex = Array.from(bytes, (b) => b.toString(16).padStart(2, '0')).join('');
	return `${hex.slice(0, 8)}-${hex.slice(8, 12)}-${hex.slice(12, 16)}-${hex.slice(16, 20)}-${hex.slice(20)}`;
}

/**
 * Tags after one was put in (or changed): accepted ones of the same recording give way to it.
 *
 * A tag that is covered is removed; one that is cut in the middle becomes two, the right part with a new id.
 *
 * @param tags all tags of the session; `newer` replaces the one of its id or is added
 * @param makeId gives the id of a right part
 */
export function putTag(tags: readonly Tag[], newer: Tag, makeId: () => string = newTagId): Tag[] {
	const result: Tag[] = [];
	let placed = false;
	for (const tag of tags) {
		if (tag.id === newer.id) {
			result.push(newer);
			placed = true;
		} else result.push(...(newer.status === 'accepted' ? trimmed(tag, newer, makeId) : [tag]));
	}
	if (!placed) result.push(newer);
	return result;
}

function trimmed(tag: Tag, newer: Tag, makeId: () => string): Tag[] {
	if (tag.status !== 'accepted' || tag.recordingId !== newer.recordingId) return [tag];
	if (tag.endS <= newer.startS || tag.startS >= newer.endS) return [tag];
	const left = longEnough(tag.startS, newer.startS);
	const right = longEnough(newer.endS, tag.endS);
	if (left && right) return [{ ...tag, endS: newer.startS }, { ...tag, id: makeId(), version: 0, startS: newer.endS }];
	if (left) return [{ ...tag, endS: newer.startS }];
	if (right) return [{ ...tag, startS: newer.endS }];
	return [{ ...tag, status: 'removed' }];
}

export type CleanedStanding =
	/** Counted in both, or left out of the cleaned analysis; `I` changes it. */
	| { out: boolean; fixed: false }
	/** Left out of (or in) both whatever the tag says; `why` is the sentence. */
	| { out: boolean; fixed: true; why: string };

/** Whether a tag, once accepted, leaves the cleaned analysis, and whether the analyst can change that for this one tag. */
export function cleanedStanding(tag: Pick<Tag, 'cleanedOverride'>, kind: TagKind, role: 'reference' | 'wearable', plan: Pick<AnalysisPlan, 'treatments'>): CleanedStanding {
	const treatment = treatmentOf(plan, kind);
	if (sideBlamed(kind, role) === 'reference' && (kind.blames !== 'reference' || treatment.primary === 'out'))
		return { out: true, fixed: true, why: 'A fault on the reference leaves both analyses: there is nothing to compare with.' };
	if (kind.blames === 'reference' && role === 'wearable')
		return { out: false, fixed: true, why: `${kind.name} blames the reference and takes nothing out of a wearable. Put it on the reference.` };
	return { out: (tag.cleanedOverride ?? treatment.cleaned) === 'out', fixed: false };
}
