import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { tickSteps, timeAt, timeTicks, timeX, type TimeFrame } from './time-frame';

const SEVEN_46 = Date.UTC(2025, 9, 14, 7, 46) / 1000;
const tenMinutes: TimeFrame = { fromS: SEVEN_46, toS: SEVEN_46 + 600, widthPx: 796 };

describe('the two-clock axis', () => {
	it('labels whole minutes in a ten-minute view, from the first to the last', () => {
		const labels = timeTicks(tenMinutes).flatMap((t) => t.label ?? []);
		expect(labels).toEqual(['07:46', '07:47', '07:48', '07:49', '07:50', '07:51', '07:52', '07:53', '07:54', '07:55', '07:56']);
	});

	it("stands the wearable's own clock shifted by the offset, to a fraction of a pixel", () => {
		const own = timeTicks(tenMinutes, 3.42).find((t) => t.label === '07:47');
		const axis = timeTicks(tenMinutes).find((t) => t.label === '07:47');
		expect(own!.x - axis!.x).toBeCloseTo((3.42 * 796) / 600, 6);
	});

	it('never crowds labels or small ticks, from a tenth of a second to four days', () => {
		fc.assert(
			fc.property(fc.double({ min: 0.5, max: 345_600, noNaN: true }), fc.integer({ min: 200, max: 2400 }), (spanS, widthPx) => {
				const frame = { fromS: SEVEN_46, toS: SEVEN_46 + spanS, widthPx };
				const [labelled, middle, small] = tickSteps(frame);
				if (labelled < 86_400) {
					expect((labelled * widthPx) / spanS).toBeGreaterThanOrEqual(66 - 1e-6);
					expect((small * widthPx) / spanS).toBeGreaterThanOrEqual(3 - 1e-6);
				}
				expect(Math.abs(labelled / small - Math.round(labelled / small))).toBeLessThan(1e-9);
				expect(Math.abs(middle / small - Math.round(middle / small))).toBeLessThan(1e-9);
			})
		);
	});

	it('turns a position into the time that stands there', () => {
		expect(timeAt(timeX(SEVEN_46 + 123.45, tenMinutes), tenMinutes)).toBeCloseTo(SEVEN_46 + 123.45, 5);
	});
});
