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

/** Buffers of 2 × size numbers, kept as the plans are; up to this size, since longer ones are wanted seldom and weigh megabytes. */
const LARGEST_KEPT = 1 << 19;
const kept = new Map<string, Float64Array>();

/** The buffer `name` for complex columns of `size`: filled with whatever was last in it. */
export function complexBuffer(size: number, name: 'input' | 'first' | 'second' | 'sum'): Float64Array {
	if (size > LARGEST_KEPT) return new Float64Array(2 * size);
	const key = `${name} ${size}`;
	let buffer = kept.get(key);
	if (!buffer) {
		buffer = new Float64Array(2 * size);
		kept.set(key, buffer);
	}
	return buffer;
}

/** exp(2πi k / size) for k below half the size, as pairs. */
const turnsKept = new Map<number, Float64Array>();
function turns(size: number): Float64Array {
	let found = turnsKept.get(size);
	if (!found) {
		found = new Float64Array(size);
		for (let k = 0; k < size / 2; k++) {
			found[2 * k] = Math.cos((2 * Math.PI * k) / size);
			found[2 * k + 1] = Math.sin((2 * Math.PI * k) / size);
		}
		turnsKept.set(size, found);
	}
	return found;
}

/**
 * The inverse transform of a spectrum whose column is real, by one complex transform of half the size.
 *
 * Even and odd places of a real column are the real and imaginary parts of a column half as long (Cooley, Lewis and
 * Welch 1970, J Sound Vib 12:315-337). Only bins 0 to size / 2 are read.
 * @param spectrum pairs, at least size + 2 numbers; its first size numbers are overwritten
 * @param out gets the column, `size` numbers and no more are touched
 */
export function inverseReal(size: number, spectrum: Float64Array, out: Float64Array): void {
	const half = size / 2;
	const w = turns(size);
	// Conjugated, so that a forward transform serves as the inverse; the scale goes in here.
	const scale = 1 / size;
	for (let k = 0, m = half; k <= m; k++, m--) {
		const kr = spectrum[2 * k];
		const ki = spectrum[2 * k + 1];
		const mr = spectrum[2 * m];
		const mi = spectrum[2 * m + 1];
		// Even part E and odd part O of bin k; those of bin m are their mirror images.
		const er = kr + mr;
		const ei = ki - mi;
		const dr = kr - mr;
		const di = ki + mi;
		const c = w[2 * k];
		const s = w[2 * k + 1];
		const or = dr * c - di * s;
		const oi = dr * s + di * c;
		spectrum[2 * k] = (er - oi) * scale;
		spectrum[2 * k + 1] = -(ei + or) * scale;
		if (k === 0 || k === m) continue;
		spectrum[2 * m] = (er + oi) * scale;
		spectrum[2 * m + 1] = (ei - or) * scale;
	}
	fftPlan(half).transform(out, spectrum);
	for (let i = 1; i < size; i += 2) out[i] = -out[i];
}

/**
 * Plain cross-correlation at all overlaps.
 *
 * out[k] = Σ a[n + k − (b.length − 1)] b[n], length a.length + b.length − 1, so that lag 0 stands at b.length − 1
 * (the order of numpy.correlate(a, b, "full")). Both real inputs go through one complex transform, and the real
 * result comes back through one of half the size.
 */
export function crossCorrelate(a: Float64Array, b: Float64Array): Float64Array {
	const length = a.length + b.length - 1;
	const size = Math.max(4, powerOfTwo(length));
	const input = complexBuffer(size, 'input');
	const spectrum = complexBuffer(size, 'first');
	const both = Math.min(a.length, b.length);
	for (let i = 0; i < both; i++) {
		input[2 * i] = a[i];
		input[2 * i + 1] = b[i];
	}
	for (let i = both; i < a.length; i++) {
		input[2 * i] = a[i];
		input[2 * i + 1] = 0;
	}
	for (let i = both; i < b.length; i++) {
		input[2 * i] = 0;
		input[2 * i + 1] = b[i];
	}
	input.fill(0, 2 * Math.max(a.length, b.length));
	fftPlan(size).transform(spectrum, input);
	// With Z the transform of a + i b: A = (Z(k) + conj Z(−k)) / 2, B = (Z(k) − conj Z(−k)) / 2i; wanted A conj(B).
	const product = input;
	for (let k = 0; k <= size / 2; k++) {
		const m = (size - k) & (size - 1);
		const zr = spectrum[2 * k];
		const zi = spectrum[2 * k + 1];
		const mr = spectrum[2 * m];
		const mi = spectrum[2 * m + 1];
		product[2 * k] = ((zr + mr) * (zi + mi) - (zi - mi) * (zr - mr)) / 4;
		product[2 * k + 1] = ((zi - mi) * (zi + mi) + (zr + mr) * (zr - mr)) / 4;
	}
	inverseReal(size, product, spectrum);
	const out = new Float64Array(length);
	out.set(spectrum.subarray(size - (b.length - 1), size), 0);
	out.set(spectrum.subarray(0, a.length), b.length - 1);
	return out;
}
