/**
 * Fourier transforms by fft.js, kept per size: making a plan costs more than using it. One worker, one set.
 *
 * fft.js knows powers of two only; three transforms of a third of the size and one step of radix 3 (Cooley and Tukey
 * 1965, Math Comput 19:297-301) give the sizes halfway between, which spare a quarter of the padding.
 */
import FFT from 'fft.js';

export interface Transform {
	size: number;
	/** Forward complex transform, exp(−2πi nk / size); pairs of real and imaginary part. `out` and `input` differ. */
	transform(out: Float64Array, input: Float64Array): void;
}

const plans = new Map<number, Transform>();

/** The forward transform of `size`: a power of two, or three times one. */
export function transformOf(size: number): Transform {
	let plan = plans.get(size);
	if (!plan) {
		plan = size % 3 === 0 ? radixThree(size) : new FFT(size);
		plans.set(size, plan);
	}
	return plan;
}

/** The smallest size that `transformOf` offers of at least `n` places; even, so that `inverseReal` can halve it. */
export function fastSize(n: number): number {
	let size = 4;
	while (size < n) size *= 2;
	return size >= 16 && 0.75 * size >= n ? 0.75 * size : size;
}

function radixThree(size: number): Transform {
	const third = size / 3;
	const inner = transformOf(third);
	const parts = [0, 1, 2].map(() => new Float64Array(2 * third));
	const gathered = new Float64Array(2 * third);
	const turn = new Float64Array(4 * third);
	for (let k = 0; k < third; k++) {
		turn[4 * k] = Math.cos((2 * Math.PI * k) / size);
		turn[4 * k + 1] = -Math.sin((2 * Math.PI * k) / size);
		turn[4 * k + 2] = Math.cos((4 * Math.PI * k) / size);
		turn[4 * k + 3] = -Math.sin((4 * Math.PI * k) / size);
	}
	const tilt = Math.sqrt(3) / 2;
	return {
		size,
		transform(out, input) {
			for (let part = 0; part < 3; part++) {
				for (let i = 0, k = 2 * part; i < 2 * third; i += 2, k += 6) {
					gathered[i] = input[k];
					gathered[i + 1] = input[k + 1];
				}
				inner.transform(parts[part], gathered);
			}
			const [a, b, c] = parts;
			for (let i = 0, t = 0; i < 2 * third; i += 2, t += 4) {
				const br = b[i] * turn[t] - b[i + 1] * turn[t + 1];
				const bi = b[i] * turn[t + 1] + b[i + 1] * turn[t];
				const cr = c[i] * turn[t + 2] - c[i + 1] * turn[t + 3];
				const ci = c[i] * turn[t + 3] + c[i + 1] * turn[t + 2];
				const sr = br + cr;
				const si = bi + ci;
				const mr = a[i] - sr / 2;
				const mi = a[i + 1] - si / 2;
				const dr = tilt * (br - cr);
				const di = tilt * (bi - ci);
				out[i] = a[i] + sr;
				out[i + 1] = a[i + 1] + si;
				out[i + 2 * third] = mr + di;
				out[i + 1 + 2 * third] = mi - dr;
				out[i + 4 * third] = mr - di;
				out[i + 1 + 4 * third] = mi + dr;
			}
		}
	};
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
	transformOf(half).transform(out, spectrum);
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
	const size = fastSize(length);
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
	transformOf(size).transform(spectrum, input);
	// With Z the transform of a + i b: A = (Z(k) + conj Z(−k)) / 2, B = (Z(k) − conj Z(−k)) / 2i; wanted A conj(B).
	const product = input;
	for (let k = 0; k <= size / 2; k++) {
		const m = k === 0 ? 0 : size - k;
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
