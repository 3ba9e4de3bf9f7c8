/**
 * Hexagonal density in six logarithmic steps: many readings travel and draw as few cells.
 *
 * Cells live on a lattice in bpm, so that the same readings always give the same cells, whatever the size of the
 * picture. Pointy-top hexagons: columns `1.5 bpm * sqrt(3)` apart by default, rows in half steps.
 */
export interface HexLattice {
	/** Width of a cell across its flats, in units of x. */
	cellX: number;
	/** Height of a row, in units of y. */
	rowY: number;
}

/** Flat triples: column, row, count. */
export type HexCells = number[];

const KEY_SPAN = 1 << 20;

/** Counts readings per cell. `x` and `y` of equal length; a pair with a value that is not finite is left out. */
export function hexCells(x: ArrayLike<number>, y: ArrayLike<number>, lattice: HexLattice, into = new Map<number, number>()): Map<number, number> {
	for (let i = 0; i < x.length; i++) {
		if (!Number.isFinite(x[i]) || !Number.isFinite(y[i])) continue;
		const row = Math.round(y[i] / lattice.rowY);
		const col = Math.round(x[i] / lattice.cellX - (row & 1 ? 0.5 : 0));
		const key = (row + 512) * KEY_SPAN + (col + 512);
		into.set(key, (into.get(key) ?? 0) + 1);
	}
	return into;
}

/** The map as flat triples, ready to travel. */
export function packCells(cells: Map<number, number>): HexCells {
	const out: number[] = [];
	for (const [key, count] of cells) out.push((key % KEY_SPAN) - 512, Math.floor(key / KEY_SPAN) - 512, count);
	return out;
}

export const DENSITY_STEPS = 6;

/** Step 0..5 of a count, logarithmic against the fullest cell. */
export function densityStep(count: number, fullest: number): number {
	return Math.min(DENSITY_STEPS - 1, Math.floor((Math.log(count) / Math.log(fullest + 1)) * DENSITY_STEPS));
}

/** Fill of a density step in a trace's own hue (number 0 is the reference's ink). */
export function densityFill(number: number, step: number): string {
	const hue = number === 0 ? 'var(--ink)' : `var(--t${number})`;
	return `color-mix(in oklab, ${hue} ${[18, 34, 52, 72, 94, 66][step]}%, var(${step === DENSITY_STEPS - 1 ? '--ink' : '--well'}))`;
}

/** One SVG path per density step for cells on the lattice, drawn through the two scales. */
export function hexPaths(
	cells: HexCells,
	lattice: HexLattice,
	x: (v: number) => number,
	y: (v: number) => number
): { paths: string[]; fullest: number } {
	let fullest = 0;
	for (let i = 2; i < cells.length; i += 3) fullest = Math.max(fullest, cells[i]);
	const halfWidth = Math.abs(x(lattice.cellX) - x(0)) / 2 + 0.15;
	const rowHeight = Math.abs(y(lattice.rowY) - y(0));
	const top = (rowHeight * 2) / 3 + 0.15;
	const shoulder = top / 2;
	const parts: string[][] = Array.from({ length: DENSITY_STEPS }, () => []);
	for (let i = 0; i < cells.length; i += 3) {
		const cx = x((cells[i] + (cells[i + 1] & 1 ? 0.5 : 0)) * lattice.cellX);
		const cy = y(cells[i + 1] * lattice.rowY);
		const p = (dx: number, dy: number) => `${(cx + dx).toFixed(1)} ${(cy + dy).toFixed(1)}`;
		parts[densityStep(cells[i + 2], fullest)].push(
			`M${p(0, -top)}L${p(halfWidth, -shoulder)}L${p(halfWidth, shoulder)}L${p(0, top)}L${p(-halfWidth, shoulder)}L${p(-halfWidth, -shoulder)}Z`
		);
	}
	return { paths: parts.map((p) => p.join('')), fullest };
}
