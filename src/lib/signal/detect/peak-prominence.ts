/** Peaks of a series and how far each stands out. */

/**
 * Indices of local maxima; a flat top counts once, at its middle (rounded down). Ends are no peaks.
 * @param value finite numbers
 */
export function localMaxima(value: ArrayLike<number>): number[] {
	const peaks: number[] = [];
	let i = 1;
	while (i < value.length - 1) {
		if (value[i - 1] < value[i]) {
			let ahead = i + 1;
			while (ahead < value.length - 1 && value[ahead] === value[i]) ahead++;
			if (value[ahead] < value[i]) {
				peaks.push((i + ahead - 1) >> 1);
				i = ahead;
			}
		}
		i++;
	}
	return peaks;
}

/**
 * Prominence of every peak: its height above the higher of the two lowest points between it and the next strictly
 * higher value on either side, or the end of the series. The definition of scipy.signal.peak_prominences.
 *
 * Linear in the length: the lowest point on the way to the next higher value is carried on a stack.
 * @param value finite numbers
 * @param peaks indices as `localMaxima` gives them, ascending
 * @returns one number a peak, in the unit of `value`
 */
export function peakProminence(value: ArrayLike<number>, peaks: readonly number[]): Float64Array {
	const left = lowestBeforeHigher(value, peaks, 1);
	const right = lowestBeforeHigher(value, peaks, -1);
	return Float64Array.from(peaks, (peak, k) => value[peak] - Math.max(left[k], right[k]));
}

/** Lowest value between each peak and the next strictly higher value before it (direction 1) or after it (−1). */
function lowestBeforeHigher(value: ArrayLike<number>, peaks: readonly number[], direction: 1 | -1): Float64Array {
	const out = new Float64Array(peaks.length);
	const heights: number[] = [];
	const lowest: number[] = [];
	let k = direction === 1 ? 0 : peaks.length - 1;
	for (let step = 0; step < value.length; step++) {
		const i = direction === 1 ? step : value.length - 1 - step;
		let low = value[i];
		while (heights.length > 0 && heights[heights.length - 1] <= value[i]) {
			heights.pop();
			low = Math.min(low, lowest.pop() as number);
		}
		heights.push(value[i]);
		lowest.push(low);
		if (i === peaks[k]) {
			out[k] = low;
			k += direction;
		}
	}
	return out;
}

export interface Peak {
	/** Index in the series that was searched. */
	at: number;
	height: number;
	prominence: number;
}

/** Peaks of at least a prominence in a series with missing values (NaN), which are stepped over. */
export function prominentPeaks(value: Float64Array, leastProminence: number): Peak[] {
	const index: number[] = [];
	for (let i = 0; i < value.length; i++) if (!Number.isNaN(value[i])) index.push(i);
	const present = Float64Array.from(index, (i) => value[i]);
	const peaks = localMaxima(present);
	const prominence = peakProminence(present, peaks);
	const found: Peak[] = [];
	peaks.forEach((peak, k) => {
		if (prominence[k] >= leastProminence) found.push({ at: index[peak], height: present[peak], prominence: prominence[k] });
	});
	return found;
}
