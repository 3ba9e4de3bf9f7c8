import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeIntervals } from './beats';
import { heartRateFromRr, soundIntervals } from './heart-rate-from-rr';

function beatsOf(rrMs: number[], startS = 1000): number[] {
	let t = startS;
	return rrMs.map((rr) => (t += rr / 1000));
}

describe('heartRateFromRr', () => {
	it('gives exactly 60 / RR for a steady heart, at every second that is half covered or more', () => {
		fc.assert(
			fc.property(fc.integer({ min: 300, max: 2000 }), (rr) => {
				const rrMs = Array.from({ length: 60 }, () => rr);
				const { bpm, dropped } = heartRateFromRr(beatsOf(rrMs), rrMs);
				expect(dropped).toBe(0);
				for (const value of bpm) expect(value).toBeCloseTo(60_000 / rr, 6);
			})
		);
	});

	it('has no lag: a step in the rate is crossed at the moment of the step', () => {
		const rrMs = [...Array.from({ length: 40 }, () => 1000), ...Array.from({ length: 60 }, () => 800)];
		const { tS, bpm } = heartRateFromRr(beatsOf(rrMs, 0), rrMs);
		const at = (t: number) => bpm[tS.indexOf(t)];
		expect(at(38)).toBeCloseTo(60, 6);
		expect(at(40)).toBeCloseTo(67.5, 6);
		expect(at(42)).toBeCloseTo(75, 6);
	});

	it('leaves out a missed beat and the early and late one around an extra beat, without moving the rate', () => {
		const rrMs = Array.from({ length: 60 }, () => 800);
		rrMs[20] = 1600;
		rrMs[40] = 400;
		rrMs[41] = 1200;
		expect([...soundIntervals(rrMs).keys()].filter((i) => !soundIntervals(rrMs)[i])).toEqual([20, 40, 41]);
		const { bpm, dropped } = heartRateFromRr(beatsOf(rrMs), rrMs);
		expect(dropped).toBe(3);
		for (const value of bpm) expect(value).toBeCloseTo(75, 6);
	});

	it('says nothing where the intervals have a hole', () => {
		const rrMs = Array.from({ length: 40 }, () => 800);
		const tS = beatsOf(rrMs).map((t, i) => (i < 20 ? t : t + 30));
		const rate = heartRateFromRr(tS, rrMs);
		const inside = rate.tS.filter((t) => t > tS[19] + 1 && t < tS[20] - 2);
		expect(inside).toEqual([]);
	});

	it('survives any intervals: finite, increasing, inside the span', () => {
		fc.assert(
			fc.property(fc.array(fc.integer({ min: 1, max: 60_000 }), { maxLength: 80 }), (rrMs) => {
				const tS = beatsOf(rrMs);
				const rate = heartRateFromRr(tS, rrMs);
				for (let i = 0; i < rate.tS.length; i++) {
					expect(rate.bpm[i]).toBeGreaterThan(20);
					expect(rate.bpm[i]).toBeLessThan(260);
					if (i > 0) expect(rate.tS[i]).toBeGreaterThan(rate.tS[i - 1]);
				}
			})
		);
	});
});

describe('placeIntervals', () => {
	it('follows the clock of the records over a pause instead of running on', () => {
		const rrMs = Array.from({ length: 200 }, () => 500);
		const anchor = rrMs.map((_, i) => Math.floor(1000 + 0.5 * (i + 1)) + (i >= 100 ? 300 : 0));
		const placed = placeIntervals(rrMs, anchor);
		expect(placed.sampled).toBe(false);
		expect(Math.abs(placed.tS[99] - 1050)).toBeLessThan(1);
		expect(Math.abs(placed.tS[100] - 1350)).toBeLessThan(1);
		for (let i = 1; i < placed.tS.length; i++) expect(placed.tS[i]).toBeGreaterThan(placed.tS[i - 1]);
	});
});
