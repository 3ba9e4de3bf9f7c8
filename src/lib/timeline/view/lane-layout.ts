/** Tags on one lane: which are in view, where their words go, and which edge or tag stands under a pointer. */
import type { AnalysisPlan } from '../../agreement';
import type { TagKind } from '../../agreement/tag';
import { onAxis, type Tag } from '../model';
import { cleanedStanding } from '../tag-rules';
import type { BenchTrack, ClockPlace } from './bench-track';
import { timeX, type TimeFrame } from './time-frame';

/** A tag as a lane draws it, on the session axis. */
export interface LaneTag {
	id: string;
	recordingId: string;
	kind: TagKind;
	fromS: number;
	toS: number;
	proposed: boolean;
	held: boolean;
	/** Leaves the cleaned analysis: drawn with a bar under it. */
	out: boolean;
}

export interface PlacedTag extends LaneTag {
	x: number;
	width: number;
	/** Where its word stands: on a chip inside, after its end, or nowhere because that would collide (the list has it). */
	word: { text: string; place: 'inside' | 'after'; x: number; width: number } | null;
}

/** Narrowest mark, px: shorter tags stay visible and can be hit. */
const NARROWEST_PX = 4;
/** Room that a word needs around it to stand inside. */
const INSIDE_ROOM_PX = 16;
const CHIP_PAD_PX = 4;

export type MeasureText = (text: string, italic: boolean) => number;

/** Does this tag leave the cleaned analysis? Proposals leave nothing. */
export function leavesCleaned(
	tag: Pick<Tag, 'status' | 'cleanedOverride'>,
	kind: TagKind,
	role: 'reference' | 'wearable',
	plan: AnalysisPlan
): boolean {
	return tag.status === 'accepted' && cleanedStanding(tag, kind, role, plan).out;
}

/** Tags of one recording that stand (proposed or accepted), on the axis, by start. */
export function laneTags(
	tags: readonly Tag[],
	track: BenchTrack,
	place: ClockPlace,
	kinds: ReadonlyMap<string, TagKind>,
	plan: AnalysisPlan,
	heldTagId: string | null
): LaneTag[] {
	return tags
		.flatMap((tag): LaneTag[] => {
			const kind = kinds.get(tag.kind);
			if (tag.recordingId !== track.recordingId || !kind || (tag.status !== 'proposed' && tag.status !== 'accepted')) return [];
			return [
				{
					id: tag.id,
					recordingId: tag.recordingId,
					kind,
					fromS: onAxis(tag.startS, place, track.firstS),
					toS: onAxis(tag.endS, place, track.firstS),
					proposed: tag.status === 'proposed',
					held: tag.id === heldTagId,
					out: leavesCleaned(tag, kind, track.role, plan)
				}
			];
		})
		.sort((a, b) => a.fromS - b.fromS);
}

/** Tags that reach into the frame, placed, the held one last so that its grips lie on top. */
export function placeTags(tags: readonly LaneTag[], frame: TimeFrame, measure: MeasureText): PlacedTag[] {
	const inView = tags.filter((t) => t.toS > frame.fromS && t.fromS < frame.toS);
	const placed = inView.map((tag, i): PlacedTag => {
		const x = timeX(tag.fromS, frame);
		const width = Math.max(NARROWEST_PX, timeX(tag.toS, frame) - x);
		const text = tag.proposed ? `${tag.kind.name} ?` : tag.kind.name;
		// The word stands in the part that is seen.
		const seenFrom = Math.max(0, x);
		const seenTo = Math.min(frame.widthPx, x + width);
		const chip = measure(text, tag.proposed) + 2 * CHIP_PAD_PX;
		if (seenTo - seenFrom >= chip + INSIDE_ROOM_PX)
			return { ...tag, x, width, word: { text, place: 'inside', x: (seenFrom + seenTo) / 2, width: chip } };
		const next = inView[i + 1];
		const room = next ? Math.min(frame.widthPx, timeX(next.fromS, frame)) : frame.widthPx;
		return { ...tag, x, width, word: x + width + chip < room ? { text, place: 'after', x: x + width + 3, width: chip } : null };
	});
	return placed.sort((a, b) => Number(a.held) - Number(b.held));
}

export type LaneHit = { what: 'start' | 'end' | 'body'; tag: LaneTag } | { what: 'empty' };

/** What stands at a position of a lane: an edge within `reachPx` (the held tag's first), a tag, or nothing. */
export function hitLane(tags: readonly LaneTag[], frame: TimeFrame, x: number, reachPx = 6): LaneHit {
	const byHeld = [...tags].sort((a, b) => Number(b.held) - Number(a.held));
	const ends = (tag: LaneTag) => {
		const from = timeX(tag.fromS, frame);
		return { from, to: Math.max(from + NARROWEST_PX, timeX(tag.toS, frame)) };
	};
	const edges = byHeld.flatMap((tag) => {
		const { from, to } = ends(tag);
		// A short tag keeps its middle third for being held as a whole.
		const inside = Math.min(reachPx, Math.max(2, (to - from) / 3));
		return [
			{ what: 'start' as const, tag, farPx: Math.abs(x - from), reach: x >= from ? inside : reachPx },
			{ what: 'end' as const, tag, farPx: Math.abs(x - to), reach: x <= to ? inside : reachPx }
		].filter((e) => e.farPx <= e.reach);
	});
	const nearest = edges.reduce<(typeof edges)[number] | null>(
		(best, e) => (!best || (e.tag.held && !best.tag.held) || (e.tag.held === best.tag.held && e.farPx < best.farPx) ? e : best),
		null
	);
	if (nearest) return { what: nearest.what, tag: nearest.tag };
	const body = byHeld.find((tag) => x >= ends(tag).from && x <= ends(tag).to);
	return body ? { what: 'body', tag: body } : { what: 'empty' };
}
