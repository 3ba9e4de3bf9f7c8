import { describe, expect, it } from 'vitest';
import { correlationAt, correlationRange, curvePath } from './rule-curve';

const curve = { shiftS: Float64Array.from([-2, -1, 0, 1, 2]), r: Float64Array.from([0.1, 0.5, 0.9, NaN, 0.2]) };

describe('the correlation curve', () => {
	it('is read straight between its points, and not at all where it is not determinable or not known', () => {
		expect(correlationAt(curve, -0.5)).toBeCloseTo(0.7, 9);
		expect(correlationAt(curve, 0)).toBeCloseTo(0.9, 9);
		expect(correlationAt(curve, 0.5)).toBeNull();
		expect(correlationAt(curve, 3)).toBeNull();
	});

	it('leaves a gap where too little overlaps, instead of a line through nothing', () => {
		expect(curvePath(curve, (s) => s, (r) => r)).toBe('M-2.0 0.1L-1.0 0.5L0.0 0.9M2.0 0.2');
	});

	it('takes its scale from what is shown', () => {
		expect(correlationRange(curve, -1, 2)).toEqual({ low: 0.2, high: 0.9 });
		expect(correlationRange(curve, 0.9, 1.1)).toBeNull();
	});
});
