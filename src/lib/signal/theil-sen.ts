/**
 * A straight line through points of which some are wild: median of the slopes of pairs, then median of what is left.
 *
 * @param x places, at least two different
 * @param y values, same length
 * @returns value at x = 0 and slope
 * @see Sen PK (1968) J Am Stat Assoc 63:1379-1389
 */
export function theilSen(x: ArrayLike<number>, y: ArrayLike<number>): { intercept: number; slope: number } {
	const n = x.length;
	// A few hundred points make enough pairs; more of them are thinned.
	const every = Math.max(1, Math.ceil(n / 250));
	const slopes: number[] = [];
	for (let i = 0; i < n; i += every) for (let j = i + every; j < n; j += every) if (x[j] !== x[i]) slopes.push((y[j] - y[i]) / (x[j] - x[i]));
	const slope = median(slopes);
	return { slope, intercept: median(Array.from({ length: n }, (_, i) => y[i] - slope * x[i])) };
}

/** Middle value; NaN of none. */
export function median(values: ArrayLike<number>): number {
	const sorted = Float64Array.from(values).sort();
	const n = sorted.length;
	return n === 0 ? NaN : n % 2 ? sorted[n >> 1] : (sorted[n / 2 - 1] + sorted[n / 2]) / 2;
}
