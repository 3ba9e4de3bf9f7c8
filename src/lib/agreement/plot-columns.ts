/** Columns for the plots: density, cumulative share of errors, errors by heart-rate zone. Pure counts, no drawing. */
import { notDeterminable, type Figure } from './determinable';
import type { PairColumns } from './error-quantiles';
import { meanAbsoluteError } from './errors';
import { mergeSums, sumPairs, type PairSums } from './sums';

export interface Density {
	/** Centres of the cells that hold readings, in the plot's units, and how many readings each holds. */
	x: Float64Array;
	y: Float64Array;
	count: Uint32Array;
	/** Largest count. */
	most: number;
	/** Width of a cell, corner to corner across flat sides. */
	size: number;
}

export type PlotKind = 'scatter' | 'difference';

/**
 * Readings by hexagonal cell, pointed up. `scatter`: wearable against reference. `difference`: wearable − reference
 * against the mean of both.
 *
 * @param groups pairs, bpm
 * @param sizeBpm distance between the centres of neighbouring cells in a row
 */
export function hexDensity(groups: readonly PairColumns[], kind: PlotKind, sizeBpm: number): Density {
	const rowHeight = (sizeBpm * Math.sqrt(3)) / 2;
	const cells = new Map<number, number>();
	for (const { reference, wearable } of groups) {
		for (let i = 0; i < reference.length; i++) {
			const x = kind === 'scatter' ? reference[i] : (reference[i] + wearable[i]) / 2;
			const y = kind === 'scatter' ? wearable[i] : wearable[i] - reference[i];
			// The nearer of the two candidate centres, one in an even row and one in an odd row.
			const row = y / rowHeight;
			const lowRow = Math.floor(row);
			const first = nearestIn(lowRow, x, sizeBpm);
			const second = nearestIn(lowRow + 1, x, sizeBpm);
			const far = (column: number, r: number) => (x - centreX(column, r, sizeBpm)) ** 2 + (y - r * rowHeight) ** 2;
			const key = far(first, lowRow) <= far(second, lowRow + 1) ? keyOf(first, lowRow) : keyOf(second, lowRow + 1);
			cells.set(key, (cells.get(key) ?? 0) + 1);
		}
	}
	const keys = [...cells.keys()].sort((a, b) => a - b);
	const density: Density = {
		x: new Float64Array(keys.length),
		y: new Float64Array(keys.length),
		count: new Uint32Array(keys.length),
		most: 0,
		size: sizeBpm
	};
	keys.forEach((key, i) => {
		const row = Math.floor(key / COLUMNS) - ROWS_BELOW;
		const column = (key % COLUMNS) - ROWS_BELOW;
		density.x[i] = centreX(column, row, sizeBpm);
		density.y[i] = row * rowHeight;
		density.count[i] = cells.get(key) ?? 0;
		density.most = Math.max(density.most, density.count[i]);
	});
	return density;
}

const ROWS_BELOW = 1 << 20;
const COLUMNS = 1 << 21;
const keyOf = (column: number, row: number) => (row + ROWS_BELOW) * COLUMNS + column + ROWS_BELOW;
const shiftOf = (row: number) => (row & 1 ? 0.5 : 0);
const nearestIn = (row: number, x: number, size: number) => Math.round(x / size - shiftOf(row));
const centreX = (column: number, row: number, size: number) => (column + shiftOf(row)) * size;

/**
 * Share of readings with |d| at or below each step.
 * @returns shares 0 to 1 at 0, step, 2 · step, … up to `maxBpm`
 */
export function cumulativeErrorShare(groups: readonly PairColumns[], stepBpm: number, maxBpm: number): Float64Array {
	const steps = Math.floor(maxBpm / stepBpm + 1e-9);
	const shares = new Float64Array(steps + 1);
	let n = 0;
	for (const { reference, wearable } of groups) {
		n += reference.length;
		for (let i = 0; i < reference.length; i++) {
			const bin = Math.ceil(Math.abs(wearable[i] - reference[i]) / stepBpm - 1e-9);
			if (bin <= steps) shares[bin]++;
		}
	}
	for (let i = 0, sum = 0; i <= steps; i++) shares[i] = n > 0 ? (sum += shares[i]) / n : 0;
	return shares;
}

export interface ZoneErrors {
	/** [from, to) of the reference, bpm. */
	fromBpm: number;
	toBpm: number;
	n: number;
	bias: Figure;
	mae: Figure;
	sums: PairSums;
}

/**
 * Errors by zone of the reference's heart rate.
 * @param edgesBpm increasing; zones are [edge, next edge), the first and last are open to the ends with ∓ Infinity
 */
export function errorsByZone(groups: readonly PairColumns[], edgesBpm: readonly number[]): ZoneErrors[] {
	const zones: ZoneErrors[] = [];
	for (let z = 0; z + 1 < edgesBpm.length; z++) {
		const sums = mergeSums(
			groups.map(({ reference, wearable }) => {
				const rows: number[] = [];
				for (let i = 0; i < reference.length; i++)
					if (reference[i] >= edgesBpm[z] && reference[i] < edgesBpm[z + 1]) rows.push(i);
				return sumPairs(
					Float64Array.from(rows, (i) => reference[i]),
					Float64Array.from(rows, (i) => wearable[i])
				);
			})
		);
		zones.push({
			fromBpm: edgesBpm[z],
			toBpm: edgesBpm[z + 1],
			n: sums.n,
			bias: sums.n > 0 ? sums.meanDifference : notDeterminable('There are no readings in this zone.'),
			mae: meanAbsoluteError(sums),
			sums
		});
	}
	return zones;
}
