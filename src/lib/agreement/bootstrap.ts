/**
 * Cluster bootstrap: people, then their sessions, are drawn with replacement; never seconds. Works on the sessions'
 * sums, so the cost does not depend on how long the sessions are.
 */
import { ONE_CLUSTER } from './cluster-mean';
import { normalCdf, normalQuantile } from './distributions';
import { notDeterminable, type Interval, type NotDeterminable } from './determinable';
import { Sfc32 } from './random';
import { joinSessions, sessionsByParticipant, type ClusterLevel, type SessionSums } from './sessions';
import { leaveOneOut, mergeMoments, type PairMoments } from './sums';

/** Figures that the bootstrap gives intervals for. */
export const RESAMPLED = ['bias', 'mae', 'mape', 'rmse', 'sdNaive', 'ccc', 'within5bpm', 'within10pct'] as const;
export type Resampled = (typeof RESAMPLED)[number];

export interface BootstrapInterval {
	percentile: [number, number];
	/** Bias-corrected and accelerated (Efron B 1987, J Am Stat Assoc 82:171-185). */
	bca: [number, number];
	standardError: number;
}

export interface BootstrapOptions {
	resamples: number;
	seed: number;
	cluster?: ClusterLevel;
	confidence?: number;
	/** Which figures; default all. */
	figures?: readonly Resampled[];
}

/** Sums that are needed, one column each. */
const COLUMNS = ['n', 'd', 'dd', 'absolute', 'relative', 'x', 'xx', 'y', 'yy', 'within5', 'within10'] as const;
type Column = (typeof COLUMNS)[number];
const NEEDS: Record<Resampled, readonly Column[]> = {
	bias: ['n', 'd'],
	mae: ['n', 'absolute'],
	mape: ['n', 'relative'],
	rmse: ['n', 'd', 'dd'],
	sdNaive: ['n', 'd', 'dd'],
	ccc: ['n', 'd', 'dd', 'x', 'xx', 'y', 'yy'],
	within5bpm: ['n', 'within5'],
	within10pct: ['n', 'within10']
};

/**
 * Bootstrap intervals of figures over sessions or over people and their sessions.
 *
 * @param sessions sums by session; those without pairs are passed over
 * @param options.resamples number of draws, at least 200; the same seed gives the same intervals
 * @returns intervals by figure, or the reason why there are none (fewer than two independent units)
 */
export function bootstrapFigures(
	sessions: readonly SessionSums[],
	options: BootstrapOptions
): Partial<Record<Resampled, BootstrapInterval | NotDeterminable>> {
	const { resamples, seed, cluster = 'session', confidence = 0.95, figures = RESAMPLED } = options;
	const used = joinSessions(sessions).filter((s) => s.sums.n > 0);
	const groups = cluster === 'participant' ? sessionsByParticipant(used) : used.map((s) => [s]);
	if (groups.length < 2)
		return Object.fromEntries(
			figures.map((f) => [f, notDeterminable(groups.length ? ONE_CLUSTER : 'There are no pairs.')])
		);
	const columns = COLUMNS.filter((c) => figures.some((f) => NEEDS[f].includes(c)));
	const ordered = groups.flat();
	const whole = mergeMoments(ordered.map((s) => s.sums));
	const origin = { x: whole.meanReference, y: whole.meanWearable, d: whole.meanDifference };
	const table = sumTable(
		ordered.map((s) => s.sums),
		columns,
		origin
	);
	const totals = drawTotals(
		table,
		columns.length,
		groups.map((g) => g.length),
		resamples,
		new Sfc32(seed)
	);
	const seen = columnTotals(table, columns.length);
	const withoutOne = leaveOneOut(groups.map((g) => mergeMoments(g.map((s) => s.sums))));
	const left = sumTable(withoutOne, columns, origin);
	return Object.fromEntries(
		figures.map((figure) => {
			const of = figureFrom(figure, columns, origin);
			const values = new Float64Array(resamples);
			for (let r = 0; r < resamples; r++) values[r] = of(totals, r * columns.length);
			const centre = of(seen, 0);
			const jackknife = withoutOne.map((_, i) => of(left, i * columns.length));
			return [figure, intervalFrom(values, centre, jackknife, confidence)];
		})
	);
}

interface Origin {
	x: number;
	y: number;
	d: number;
}

/** One row a set: raw sums about a common origin near the means, so that they add up and lose no digits. */
function sumTable(sets: readonly PairMoments[], columns: readonly Column[], origin: Origin): Float64Array {
	const table = new Float64Array(sets.length * columns.length);
	sets.forEach((s, row) => {
		const [x, y, d] = [s.meanReference - origin.x, s.meanWearable - origin.y, s.meanDifference - origin.d];
		const value: Record<Column, number> = {
			n: s.n,
			d: s.n * d,
			dd: s.squaresDifference + s.n * d * d,
			absolute: s.absolute,
			relative: s.relative,
			x: s.n * x,
			xx: s.squaresReference + s.n * x * x,
			y: s.n * y,
			yy: s.squaresWearable + s.n * y * y,
			within5: s.within5Bpm,
			within10: s.within10Pct
		};
		columns.forEach((c, j) => (table[row * columns.length + j] = value[c]));
	});
	return table;
}

function columnTotals(table: Float64Array, width: number): Float64Array {
	const totals = new Float64Array(width);
	for (let i = 0; i < table.length; i++) totals[i % width] += table[i];
	return totals;
}

/**
 * Totals of every resample. Groups are drawn with replacement, then within each drawn group its sessions; with one
 * session a group this is the plain bootstrap of sessions.
 */
function drawTotals(
	table: Float64Array,
	width: number,
	sizes: readonly number[],
	resamples: number,
	generator: Sfc32
): Float64Array {
	const totals = new Float64Array(resamples * width);
	const flat = sizes.every((size) => size === 1);
	const k = sizes.length;
	const starts = new Int32Array(k);
	for (let g = 1; g < k; g++) starts[g] = starts[g - 1] + sizes[g - 1];
	const count = table.length / width;
	// Column by column, so that a sweep reads straight ahead.
	const columns = Array.from({ length: width }, (_, j) =>
		Float64Array.from({ length: count }, (__, i) => table[i * width + j])
	);
	const times = new Float64Array(count);
	const draw = new BoundedDraw(generator);
	if (flat && width <= 4 && k <= NARROW) {
		const rows = new Float64Array(count * 4);
		columns.forEach((column, j) => column.forEach((value, i) => (rows[i * 4 + j] = value)));
		for (let r = 0; r < resamples; r++) draw.addInto(rows, k, totals, r * width, width);
		return totals;
	}
	for (let r = 0; r < resamples; r++) {
		times.fill(0);
		if (flat) draw.countInto(times, k);
		else {
			for (let i = 0; i < k; i++) {
				const g = draw.below(k);
				for (let j = 0; j < sizes[g]; j++) times[starts[g] + draw.below(sizes[g])]++;
			}
		}
		addRows(columns, times, totals, r * width);
	}
	return totals;
}

function addRows(columns: readonly Float64Array[], times: Float64Array, totals: Float64Array, at: number): void {
	// Three columns a sweep: their sums stay in registers and each count is read once for the three.
	let j = 0;
	for (; j + 2 < columns.length; j += 3) {
		const [one, two, three] = [columns[j], columns[j + 1], columns[j + 2]];
		let first = 0;
		let second = 0;
		let third = 0;
		for (let i = 0; i < times.length; i++) {
			const t = times[i];
			first += t * one[i];
			second += t * two[i];
			third += t * three[i];
		}
		totals[at + j] = first;
		totals[at + j + 1] = second;
		totals[at + j + 2] = third;
	}
	for (; j < columns.length; j++) {
		const column = columns[j];
		let sum = 0;
		for (let i = 0; i < times.length; i++) sum += times[i] * column[i];
		totals[at + j] = sum;
	}
}

/** Largest bound for which sixteen bits are drawn; above, whole words are. */
const NARROW = 4096;

/** Whole numbers below a bound, every one equally likely (Lemire D 2019, multiply and reject), two from one word. */
class BoundedDraw {
	private readonly words = new Uint32Array(2048);
	private readonly halves = new Uint16Array(this.words.buffer);
	private used = this.halves.length;

	constructor(private readonly generator: Sfc32) {}

	private refill(): void {
		this.generator.fill(this.words);
		this.used = 0;
	}

	below(bound: number): number {
		if (bound > NARROW) return this.wideBelow(bound);
		const reject = 65536 % bound;
		for (;;) {
			if (this.used >= this.halves.length) this.refill();
			const product = this.halves[this.used++] * bound;
			if ((product & 0xffff) >= reject) return product >>> 16;
		}
	}

	private wideBelow(bound: number): number {
		const limit = 4294967296 - (4294967296 % bound);
		for (;;) {
			if (this.used + 1 >= this.halves.length) this.refill();
			const word = this.words[(this.used + 1) >>> 1];
			this.used = (((this.used + 1) >>> 1) + 1) * 2;
			if (word < limit) return word % bound;
		}
	}

	/**
	 * Draw as many rows as there are and add them up at once; for few columns cheaper than counting first. Rows are four
	 * columns wide, unused ones 0. The same draws as `countInto`.
	 */
	addInto(rows: Float64Array, bound: number, totals: Float64Array, at: number, width: number): void {
		const reject = 65536 % bound;
		const { halves } = this;
		let first = 0;
		let second = 0;
		let third = 0;
		let fourth = 0;
		let left = bound;
		while (left > 0) {
			if (this.used >= halves.length) this.refill();
			let next = this.used;
			for (; next < halves.length && left > 0; next++) {
				const product = halves[next] * bound;
				if ((product & 0xffff) < reject) continue;
				const row = (product >>> 16) << 2;
				first += rows[row];
				second += rows[row + 1];
				third += rows[row + 2];
				fourth += rows[row + 3];
				left--;
			}
			this.used = next;
		}
		const sums = [first, second, third, fourth];
		for (let j = 0; j < width; j++) totals[at + j] = sums[j];
	}

	/** Draw as many numbers below `bound` as there are, and count how often each came. */
	countInto(times: Float64Array, bound: number): void {
		if (bound > NARROW) {
			for (let i = 0; i < bound; i++) times[this.wideBelow(bound)]++;
			return;
		}
		const reject = 65536 % bound;
		const { halves } = this;
		let left = bound;
		while (left > 0) {
			if (this.used >= halves.length) this.refill();
			let at = this.used;
			for (; at < halves.length && left > 0; at++) {
				const product = halves[at] * bound;
				if ((product & 0xffff) < reject) continue;
				times[product >>> 16]++;
				left--;
			}
			this.used = at;
		}
	}
}

/** The figure from one row of totals. */
function figureFrom(
	figure: Resampled,
	columns: readonly Column[],
	origin: Origin
): (totals: Float64Array, at: number) => number {
	const c = (name: Column) => columns.indexOf(name);
	const n = c('n');
	const ratio = (column: Column, scale = 1) => {
		const top = c(column);
		return (t: Float64Array, at: number) => (scale * t[at + top]) / t[at + n];
	};
	const [d, dd, x, xx, y, yy] = (['d', 'dd', 'x', 'xx', 'y', 'yy'] as const).map(c);
	switch (figure) {
		case 'bias':
			return (t, at) => origin.d + t[at + d] / t[at + n];
		case 'mae':
			return ratio('absolute');
		case 'mape':
			return ratio('relative', 100);
		case 'within5bpm':
			return ratio('within5');
		case 'within10pct':
			return ratio('within10');
		case 'rmse':
			// Σd² about zero from sums about the origin.
			return (t, at) => Math.sqrt(Math.max(0, (t[at + dd] + 2 * origin.d * t[at + d]) / t[at + n] + origin.d ** 2));
		case 'sdNaive':
			return (t, at) => Math.sqrt(Math.max(0, t[at + dd] - t[at + d] ** 2 / t[at + n]) / (t[at + n] - 1));
		case 'ccc':
			return (t, at) => {
				const m = t[at + n];
				const sxx = t[at + xx] - t[at + x] ** 2 / m;
				const syy = t[at + yy] - t[at + y] ** 2 / m;
				const sdd = t[at + dd] - t[at + d] ** 2 / m;
				const mean = origin.d + t[at + d] / m;
				return (sxx + syy - sdd) / (sxx + syy + m * mean * mean);
			};
	}
}

function intervalFrom(
	values: Float64Array,
	centre: number,
	jackknife: readonly number[],
	confidence: number
): BootstrapInterval | NotDeterminable {
	const b = values.length;
	let mean = 0;
	let below = 0;
	let ties = 0;
	for (const v of values) {
		mean += v / b;
		if (v < centre) below++;
		else if (v === centre) ties++;
	}
	if (!Number.isFinite(mean)) return notDeterminable('The figure is not defined in some of the resamples.');
	let squares = 0;
	for (const v of values) squares += (v - mean) ** 2;
	values.sort();
	const at = (p: number) => {
		const rank = p * (b - 1);
		const low = values[Math.floor(rank)];
		return low + (values[Math.ceil(rank)] - low) * (rank - Math.floor(rank));
	};
	const tail = (1 - confidence) / 2;
	const percentile: [number, number] = [at(tail), at(1 - tail)];
	const shift = normalQuantile(Math.min(1 - 0.5 / b, Math.max(0.5 / b, (below + ties / 2) / b)));
	const middle = jackknife.reduce((sum, v) => sum + v, 0) / jackknife.length;
	let cubes = 0;
	let spread = 0;
	for (const v of jackknife) {
		cubes += (middle - v) ** 3;
		spread += (middle - v) ** 2;
	}
	const acceleration = spread > 0 ? cubes / (6 * spread ** 1.5) : 0;
	const adjusted = (p: number) => {
		const z = shift + normalQuantile(p);
		return at(normalCdf(shift + z / (1 - acceleration * z)));
	};
	return { percentile, bca: [adjusted(tail), adjusted(1 - tail)], standardError: Math.sqrt(squares / (b - 1)) };
}

/** The percentile or BCa interval of one figure, as an interval. */
export function intervalOf(
	result: BootstrapInterval | NotDeterminable | undefined,
	kind: 'percentile' | 'bca'
): Interval {
	if (result === undefined) return notDeterminable('The figure was not resampled.');
	return 'notDeterminable' in result ? result : result[kind];
}
