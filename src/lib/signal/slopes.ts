/** Smoothed slopes of a gridded trace: what breaks and efforts leave behind when levels are not to be trusted. */

/**
 * Difference of the centred mean (±half s) between `reach` seconds after and before, bpm.
 * NaN where either mean has less than half of its seconds.
 */
export function smoothedSlope(value: Float64Array, half: number, reach: number): Float64Array {
	const mean = centredMean(value, half);
	const out = new Float64Array(value.length).fill(NaN);
	for (let i = reach; i + reach < value.length; i++) out[i] = mean[i + reach] - mean[i - reach];
	return out;
}

/** Mean of ±half around every second by running sums; NaN where fewer than half of the seconds have a value. */
export function centredMean(value: Float64Array, half: number): Float64Array {
	const n = value.length;
	const sum = new Float64Array(n + 1);
	const count = new Uint32Array(n + 1);
	for (let i = 0; i < n; i++) {
		const has = !Number.isNaN(value[i]);
		sum[i + 1] = sum[i] + (has ? value[i] : 0);
		count[i + 1] = count[i] + (has ? 1 : 0);
	}
	const out = new Float64Array(n).fill(NaN);
	const least = half + 1;
	for (let i = 0; i < n; i++) {
		const from = Math.max(0, i - half);
		const to = Math.min(n, i + half + 1);
		const c = count[to] - count[from];
		if (c >= least) out[i] = (sum[to] - sum[from]) / c;
	}
	return out;
}

/** Clips to ±limit and puts 0 where there is no value, in place: a missing slope speaks for no shift. */
export function clipped(slope: Float64Array, limit: number): Float64Array {
	for (let i = 0; i < slope.length; i++) slope[i] = Number.isNaN(slope[i]) ? 0 : Math.min(limit, Math.max(-limit, slope[i]));
	return slope;
}
