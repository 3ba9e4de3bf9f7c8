/** FFT plans of fft.js, kept per size: making one costs more than using it. One worker, one set. */
import FFT from 'fft.js';

const plans = new Map<number, FFT>();

/** The plan for `size`, a power of two. */
export function fftPlan(size: number): FFT {
	let plan = plans.get(size);
	if (!plan) {
		plan = new FFT(size);
		plans.set(size, plan);
	}
	return plan;
}

/** The smallest power of two that is at least `n` (and at least 2). */
export function powerOfTwo(n: number): number {
	let size = 2;
	while (size < n) size *= 2;
	return size;
}

/**
 * Plain cross-correlation at all overlaps.
 *
 * out[k] = Σ a[n + k − (b.length − 1)] b[n], length a.length + b.length − 1, so that lag 0 stands at b.length − 1
 * (the order of numpy.correlate(a, b, "full")). Both real inputs go through one complex transform, and the real
 * result comes back through one inverse.
 */
export function crossCorrelate(a: Float64Array, b: Float64Array): Float64Array {
	const length = a.length + b.length - 1;
	const size = powerOfTwo(length);
	const plan = fftPlan(size);
	const input = new Float64Array(2 * size);
	for (let i = 0; i < a.length; i++) input[2 * i] = a[i];
	for (let i = 0; i < b.length; i++) input[2 * i + 1] = b[i];
	const spectrum = new Float64Array(2 * size);
	plan.transform(spectrum, input);
	// With Z the transform of a + i b: A = (Z(k) + conj Z(−k)) / 2, B = (Z(k) − conj Z(−k)) / 2i; wanted A conj(B).
	const product = input;
	for (let k = 0; k < size; k++) {
		const m = (size - k) & (size - 1);
		const zr = spectrum[2 * k];
		const zi = spectrum[2 * k + 1];
		const mr = spectrum[2 * m];
		const mi = -spectrum[2 * m + 1];
		const ar = (zr + mr) / 2;
		const ai = (zi + mi) / 2;
		const br = (zi - mi) / 2;
		const bi = -(zr - mr) / 2;
		product[2 * k] = ar * br + ai * bi;
		product[2 * k + 1] = ai * br - ar * bi;
	}
	plan.inverseTransform(spectrum, product);
	const out = new Float64Array(length);
	for (let k = 0; k < length; k++) out[k] = spectrum[2 * ((k - (b.length - 1) + size) & (size - 1))];
	return out;
}
