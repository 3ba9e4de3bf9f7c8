import { describe, expect, it } from 'vitest';
import { DEFAULT_PLAN, DEFAULT_TAG_KINDS } from '../../agreement';
import type { Tag } from '../model';
import { hitLane, laneTags, leavesCleaned, placeTags, type LaneTag } from './lane-layout';

const kind = (key: string) => DEFAULT_TAG_KINDS.find((k) => k.key === key)!;
const lane = (id: string, fromS: number, toS: number, more: Partial<LaneTag> = {}): LaneTag => ({
	id, recordingId: 'r1', kind: kind('dropout'), fromS, toS, proposed: false, held: false, out: false, ...more
});
const frame = { fromS: 0, toS: 600, widthPx: 600 };
const measure = (text: string) => text.length * 6;

describe('words on a lane', () => {
	it('stand inside where the tag is 16 px longer than its word', () => {
		expect(placeTags([lane('a', 100, 200)], frame, measure)[0].word).toMatchObject({ place: 'inside', x: 150, text: 'Dropout' });
	});

	it('stand after a short tag, and are left away where the next tag would be covered', () => {
		const [a, b] = placeTags([lane('a', 100, 110), lane('b', 130, 140)], frame, measure);
		expect(a.word).toBeNull();
		expect(b.word).toMatchObject({ place: 'after', x: 143 });
	});

	it('stand in the seen part of a tag that runs out of the view', () => {
		expect(placeTags([lane('a', -400, 200)], frame, measure)[0].word).toMatchObject({ place: 'inside', x: 100 });
	});

	it('mark a proposal with a question mark', () => {
		expect(placeTags([lane('a', 100, 300, { proposed: true })], frame, measure)[0].word!.text).toBe('Dropout ?');
	});

	it('leave away what is out of view and keep even the shortest tag visible', () => {
		const placed = placeTags([lane('a', -50, -1), lane('b', 10, 10.5), lane('c', 601, 700)], frame, measure);
		expect(placed.map((t) => [t.id, t.width])).toEqual([['b', 4]]);
	});
});

describe('what stands under the pointer', () => {
	const tags = [lane('a', 100, 200), lane('b', 200, 300)];
	it('is an edge within 6 px, a tag, or the empty lane', () => {
		expect(hitLane(tags, frame, 96)).toMatchObject({ what: 'start', tag: { id: 'a' } });
		expect(hitLane(tags, frame, 150)).toMatchObject({ what: 'body', tag: { id: 'a' } });
		expect(hitLane(tags, frame, 400)).toEqual({ what: 'empty' });
	});

	it('is the edge of the held tag where two tags touch', () => {
		expect(hitLane([tags[0], { ...tags[1], held: true }], frame, 199)).toMatchObject({ what: 'start', tag: { id: 'b' } });
		expect(hitLane([{ ...tags[0], held: true }, tags[1]], frame, 201)).toMatchObject({ what: 'end', tag: { id: 'a' } });
	});

	it('is the whole of a short tag in its middle, so that it can be held without moving an edge', () => {
		expect(hitLane([lane('a', 100, 109)], frame, 104.5)).toMatchObject({ what: 'body' });
	});
});

describe('the bar of a tag that leaves the cleaned analysis', () => {
	const tag = (more: Partial<Tag>): Tag => ({
		id: 't', version: 1, recordingId: 'r1', kind: 'dropout', startS: 0, endS: 10, status: 'accepted', cleanedOverride: null, evidence: '', note: '', authorInitials: 'RT', ...more
	});
	it('follows the plan, the tag’s own override, and never stands under a proposal', () => {
		expect(leavesCleaned(tag({}), kind('dropout'), 'wearable', DEFAULT_PLAN)).toBe(true);
		expect(leavesCleaned(tag({ cleanedOverride: 'in' }), kind('dropout'), 'wearable', DEFAULT_PLAN)).toBe(false);
		expect(leavesCleaned(tag({ status: 'proposed' }), kind('dropout'), 'wearable', DEFAULT_PLAN)).toBe(false);
		expect(leavesCleaned(tag({}), kind('rest'), 'reference', DEFAULT_PLAN)).toBe(false);
	});

	it('always stands under a fault of the reference and never under a reference fault put on a wearable', () => {
		expect(leavesCleaned(tag({ cleanedOverride: 'in' }), kind('dropout'), 'reference', DEFAULT_PLAN)).toBe(true);
		expect(leavesCleaned(tag({}), kind('reference-fault'), 'wearable', DEFAULT_PLAN)).toBe(false);
	});

	it('moves with the offset, because a tag stands on its recording’s own clock', () => {
		const track = { recordingId: 'r1', number: 1, role: 'wearable' as const, name: 'Wrenna Loop 2', shortName: 'Wrenna', heartRate: { tS: new Float64Array(0), value: new Float64Array(0), gapS: 3 }, cadence: null, firstS: 0, lastS: 100 };
		const [moved] = laneTags([tag({})], track, { offsetS: 3.42, driftPpm: 0 }, new Map([['dropout', kind('dropout')]]), DEFAULT_PLAN, 't');
		expect(moved).toMatchObject({ fromS: 3.42, toS: 13.42, held: true, out: true });
	});
});
