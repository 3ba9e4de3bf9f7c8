import fc from 'fast-check';
import { expect, test } from 'vitest';
import { crossCorrelate } from './fft-plan';

/** Computed with numpy 1.24.2: numpy.correlate(a, b, "full"), out[k] = sum_n a[n + k - (len(b) - 1)] b[n]. */
const NUMPY = {"a": [0.001, 0.299, -0.274, -0.891, -0.455, -0.992, 0.06, 1.34, -0.492, -0.62, 0.49, 0.357], "b": [0.105, -0.93, -0.029, 0.695, -1.344, -0.458, -1.901, -1.29, -1.842], "full": [-0.001842, -0.552048, 0.11709700000000006, 1.4258250000000003, 2.370088, 3.832336, 3.0182249999999997, 0.5459749999999999, -0.7598039999999998, 0.5309769999999999, 0.2617670000000002, -1.286635, 1.357533, -0.6105569999999998, -2.4785980000000003, 0.476982, 0.7588449999999999, -0.5311529999999999, -0.28056000000000003, 0.037485]};

test('equals numpy.correlate(a, b, "full") (numpy 1.24.2)', () => {
	const found = crossCorrelate(Float64Array.from(NUMPY.a), Float64Array.from(NUMPY.b));
	expect(found.length).toBe(NUMPY.full.length);
	NUMPY.full.forEach((v, i) => expect(Math.abs(found[i] - v)).toBeLessThan(1e-12));
});

test('equals the sum written out, for any two columns', () => {
	const column = fc.array(fc.double({ min: -100, max: 100, noNaN: true }), { minLength: 1, maxLength: 60 });
	fc.assert(
		fc.property(column, column, (a, b) => {
			const found = crossCorrelate(Float64Array.from(a), Float64Array.from(b));
			for (let k = 0; k < a.length + b.length - 1; k++) {
				let sum = 0;
				for (let n = 0; n < b.length; n++) sum += (a[n + k - (b.length - 1)] ?? 0) * b[n];
				expect(Math.abs(found[k] - sum)).toBeLessThan(1e-8);
			}
		})
	);
});
