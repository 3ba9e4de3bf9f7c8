import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { centreFollowing, mainTicks, noniusReading, ruleOffsetS, ruleX, slideTicks, type MainTick, type RuleFrame, type SlideTick } from './nonius-scale';

const frameAt = (centreS: number, pxPerS = 252): RuleFrame => ({ centreS, centreX: 223, widthPx: 620, pxPerS });

/** Reads the rule as an eye does: from drawn positions and tick labels alone, with no knowledge of the offset. */
function readByEye(main: MainTick[], slide: SlideTick[]): { readingS: number; missPx: number } {
	const index = slide[0].x;
	let best = { division: -1, missPx: Infinity };
	for (const tick of slide) {
		const missPx = Math.min(...main.map((m) => Math.abs(m.x - tick.x)));
		if (missPx < best.missPx - 1e-9) best = { division: tick.division, missPx };
	}
	const meeting = main.reduce((near, m) => (Math.abs(m.x - slide[best.division].x) < Math.abs(near.x - slide[best.division].x) ? m : near));
	// The meeting tick of the main scale stands as many tenths from the tick left of the index as the division counts.
	const belowTenths = meeting.tenths - best.division;
	expect(Math.abs(main.find((m) => m.tenths === belowTenths)!.x - index)).toBeLessThanOrEqual(25.3);
	return { readingS: belowTenths / 10 + best.division / 100, missPx: best.missPx };
}

const offsets = fc.double({ min: -50_400, max: 50_400, noNaN: true });

describe('the nonius', () => {
	it('reads the offset to 0.01 s from the ticks alone, for any offset, on both sides of zero', () => {
		fc.assert(
			fc.property(offsets, fc.double({ min: -0.3, max: 0.3, noNaN: true }), (offsetS, asideS) => {
				const frame = frameAt(offsetS + asideS);
				const { readingS } = readByEye(mainTicks(frame), slideTicks(offsetS, frame));
				expect(Math.abs(readingS - offsetS)).toBeLessThanOrEqual(0.005 + 1e-6);
			})
		);
	});

	it('meets exactly at every whole hundredth', () => {
		for (let hundredths = -250; hundredths <= 250; hundredths++) {
			const frame = frameAt(hundredths / 100);
			const { readingS, missPx } = readByEye(mainTicks(frame), slideTicks(hundredths / 100, frame));
			expect(missPx).toBeLessThan(1e-6);
			expect(readingS).toBeCloseTo(hundredths / 100, 9);
		}
	});

	it('does not pretend to meet when the offset stands between two hundredths', () => {
		const frame = frameAt(3.4237);
		const { readingS, missPx } = readByEye(mainTicks(frame), slideTicks(3.4237, frame));
		expect(readingS).toBeCloseTo(3.42, 9);
		expect(missPx).toBeCloseTo(0.0037 * 252, 6);
	});

	it('says the same in words as the ticks do', () => {
		fc.assert(
			fc.property(offsets, (offsetS) => {
				const reading = noniusReading(offsetS);
				expect(reading.belowTenths / 10 + reading.division / 100).toBeCloseTo(reading.readingS, 9);
				expect(Math.abs(reading.readingS - offsetS)).toBeLessThanOrEqual(0.005 + 1e-6);
				expect(reading.division).toBeGreaterThanOrEqual(0);
				expect(reading.division).toBeLessThan(10);
				expect(Number.isInteger(reading.belowTenths)).toBe(true);
			})
		);
	});

	it('reads +3.42 between +3.4 and +3.5 where division 2 meets +3.6', () => {
		expect(noniusReading(3.42)).toEqual({ belowTenths: 34, division: 2, meetsTenths: 36, readingS: 3.42 });
	});

	it('reads −1.18 as −1.2 and 0.02 more', () => {
		expect(noniusReading(-1.18)).toEqual({ belowTenths: -12, division: 2, meetsTenths: -10, readingS: -1.18 });
	});

	it('reads a value a hair below a tenth as that tenth', () => {
		expect(noniusReading(3.4981)).toMatchObject({ belowTenths: 35, division: 0, readingS: 3.5 });
	});

	it('stands at the offset to a fraction of a pixel: nothing is rounded', () => {
		const frame = frameAt(0);
		expect(slideTicks(0.123456, frame)[0].x).toBeCloseTo(223 + 0.123456 * 252, 9);
		expect(ruleOffsetS(ruleX(-7.654321, frame), frame)).toBeCloseTo(-7.654321, 9);
	});

	it('keeps the main scale still while the slide moves inside the frame, and follows at its ends', () => {
		const frame = frameAt(3.4);
		expect(centreFollowing(3.6, frame, 40)).toBe(3.4);
		const right = centreFollowing(9, frame, 40);
		expect(ruleX(9 + 0.9, { ...frame, centreS: right })).toBeCloseTo(580, 6);
		const left = centreFollowing(-9, frame, 40);
		expect(ruleX(-9, { ...frame, centreS: left })).toBeCloseTo(40, 6);
	});
});
