/** A recording's heart rate thinned to lowest and highest value per pixel column, for a line of a few hundred pixels. */
export interface Outline {
	startS: number;
	endS: number;
	/** One entry a column, bpm; null where nothing was recorded. Same length. */
	min: (number | null)[];
	max: (number | null)[];
}

/** Readings farther apart than this, or than three times the usual spacing, are a gap and stay one. */
const GAP_S = 10;

/**
 * @param trace times in epoch seconds, strictly increasing, and values of the same length, not empty
 * @param span first and last moment of the line
 * @param columns number of columns, at least 1
 * @returns lowest and highest value per column; a column between two readings that are no gap apart takes the values at its sides
 */
export function outlineOf(trace: { tS: Float64Array; value: Float64Array }, span: { startS: number; endS: number }, columns = 300): Outline {
	const { tS, value } = trace;
	const min: (number | null)[] = new Array<number | null>(columns).fill(null);
	const max: (number | null)[] = new Array<number | null>(columns).fill(null);
	const lengthS = Math.max(span.endS - span.startS, 1e-9);
	const columnOf = (t: number) => Math.min(columns - 1, Math.max(0, Math.floor(((t - span.startS) / lengthS) * columns)));
	const put = (column: number, v: number) => {
		const low = min[column];
		const high = max[column];
		if (low === null || v < low) min[column] = v;
		if (high === null || v > high) max[column] = v;
	};
	const gapS = Math.max(GAP_S, 3 * usualSpacing(tS));
	for (let i = 0; i < tS.length; i++) {
		const column = columnOf(tS[i]);
		put(column, value[i]);
		if (i === 0 || tS[i] - tS[i - 1] > gapS) continue;
		for (let between = columnOf(tS[i - 1]) + 1; between < column; between++) {
			const share = (between - columnOf(tS[i - 1])) / (column - columnOf(tS[i - 1]));
			put(between, Math.round(value[i - 1] + share * (value[i] - value[i - 1])));
		}
	}
	return { startS: span.startS, endS: span.endS, min, max };
}

/** Median distance of neighbouring times, s; 0 for fewer than two. */
function usualSpacing(tS: Float64Array): number {
	if (tS.length < 2) return 0;
	const steps = new Float64Array(tS.length - 1);
	for (let i = 1; i < tS.length; i++) steps[i - 1] = tS[i] - tS[i - 1];
	return steps.sort()[Math.floor(steps.length / 2)];
}
