import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { zoneShiftOf } from '../../import/zone';
import { overlapShare, placeRecording, sessionSpan, zoneMistakePossible, type RecordingToPlace, type SessionSlot } from './placement';

const minutes = (startMin: number, endMin: number) => ({ startS: startMin * 60, endS: endMin * 60 });
const slot = (over: Partial<SessionSlot> = {}): SessionSlot => ({
	sessionId: 'one', code: 'S01', span: minutes(0, 40), participantId: null, closed: false, deviceModelIds: ['strap'], ...over
});
const watch = (over: Partial<RecordingToPlace> = {}): RecordingToPlace => ({
	span: minutes(1, 41), deviceModelId: 'watch', participantId: null, ownSessionsOnly: false, ...over
});

describe('overlap of two spans', () => {
	it('is a share of the shorter one', () => {
		expect(overlapShare(minutes(0, 40), minutes(30, 50))).toBeCloseTo(0.5);
		expect(overlapShare(minutes(0, 40), minutes(10, 12))).toBe(1);
		expect(overlapShare(minutes(0, 40), minutes(41, 50))).toBe(0);
	});
	it('counts a single reading as inside or outside', () => {
		expect(overlapShare(minutes(0, 40), minutes(5, 5))).toBe(1);
		expect(overlapShare(minutes(0, 40), minutes(45, 45))).toBe(0);
	});
	it('does not depend on which of the two is named first, and stays between 0 and 1', () => {
		const span = fc.tuple(fc.integer({ min: 0, max: 10_000 }), fc.integer({ min: 0, max: 5_000 })).map(([startS, length]) => ({ startS, endS: startS + length }));
		fc.assert(
			fc.property(span, span, (a, b) => {
				const share = overlapShare(a, b);
				expect(share).toBe(overlapShare(b, a));
				expect(share).toBeGreaterThanOrEqual(0);
				expect(share).toBeLessThanOrEqual(1);
			})
		);
	});
});

describe('placing a recording', () => {
	it('joins the session that it overlaps', () => {
		expect(placeRecording(watch(), [slot(), slot({ sessionId: 'two', span: minutes(200, 240) })])).toMatchObject({ kind: 'join', slot: { sessionId: 'one' } });
	});
	it('opens a new session when less than half of the shorter one overlaps', () => {
		expect(placeRecording(watch({ span: minutes(25, 65) }), [slot()])).toEqual({ kind: 'new' });
	});
	it('never puts two recordings of one device into a session: it asks', () => {
		expect(placeRecording(watch({ deviceModelId: 'strap' }), [slot()])).toMatchObject({ kind: 'ask', question: { code: 'device-twice', sessionId: 'one' } });
	});
	it('never joins the session of another wearer', () => {
		expect(placeRecording(watch({ participantId: 'P08' }), [slot({ participantId: 'P03' })])).toEqual({ kind: 'new' });
	});
	it('takes the named wearer when two people train at the same time', () => {
		const placed = placeRecording(watch({ participantId: 'P08' }), [slot(), slot({ sessionId: 'two', participantId: 'P08' })]);
		expect(placed).toMatchObject({ kind: 'join', slot: { sessionId: 'two' } });
	});
	it('asks when two sessions fit and no wearer is named', () => {
		expect(placeRecording(watch(), [slot(), slot({ sessionId: 'two' })])).toMatchObject({ kind: 'ask', question: { code: 'which-session', sessionIds: ['one', 'two'] } });
	});
	it('takes the session where the device is still missing when two fit', () => {
		const placed = placeRecording(watch(), [slot({ deviceModelIds: ['strap', 'watch'] }), slot({ sessionId: 'two' })]);
		expect(placed).toMatchObject({ kind: 'join', slot: { sessionId: 'two' } });
	});
	it('adds nothing to a session whose review has begun', () => {
		expect(placeRecording(watch(), [slot({ closed: true })])).toMatchObject({ kind: 'ask', question: { code: 'session-closed' } });
	});
	it("keeps a contributor's file out of sessions that are not the contributor's", () => {
		const own = watch({ participantId: 'P03', ownSessionsOnly: true });
		expect(placeRecording(own, [slot()])).toEqual({ kind: 'new' });
		expect(placeRecording(own, [slot({ participantId: 'P03' })])).toMatchObject({ kind: 'join' });
	});
});

describe('span of a session', () => {
	it("is the reference's, however long the wearables ran", () => {
		expect(sessionSpan([{ ...minutes(0, 90), isReference: false }, { ...minutes(5, 45), isReference: true }])).toEqual(minutes(5, 45));
	});
	it('is the union without a reference, leaving out a clock that is hours away', () => {
		expect(sessionSpan([{ ...minutes(0, 40), isReference: false }, { ...minutes(2, 43), isReference: false }, { ...minutes(120, 150), isReference: false }])).toEqual(minutes(0, 43));
	});
});

describe('zone mistakes', () => {
	it('are possible two hours off, not ten minutes or a day off', () => {
		expect(zoneMistakePossible(minutes(0, 40), minutes(121, 161))).toBe(true);
		expect(zoneMistakePossible(minutes(0, 40), minutes(12, 52))).toBe(false);
		expect(zoneMistakePossible(minutes(0, 40), minutes(24 * 60, 24 * 60 + 40))).toBe(false);
	});
	it('are not asked about when the lengths do not fit', () => {
		expect(zoneMistakePossible(minutes(0, 40), minutes(120, 220))).toBe(false);
	});
	it('are told from a clock that was never set', () => {
		expect(zoneShiftOf(7204)).toBe(7200);
		expect(zoneShiftOf(-5398)).toBe(-5400);
		expect(zoneShiftOf(4)).toBeNull();
		expect(zoneShiftOf(7900)).toBeNull();
		expect(zoneShiftOf(86_400)).toBeNull();
	});
});
