/**
 * From samples to a drawn line: projection on the session axis, gaps that stay gaps, and one stroke from the lowest to
 * the highest value per pixel column where readings stand closer than the pixels do.
 */
import type { AlignmentState } from '../model';
import type { TimeFrame } from './time-frame';

/** Where a line goes: a canvas path, or text for SVG. */
export interface PathSink {
	moveTo(x: number, y: number): void;
	lineTo(x: number, y: number): void;
	/** Ink of one whole pixel column, joined to the one before or after a gap; a sink without it gets the column as a stroke. */
	column?(x: number, fromY: number, toY: number, joined: boolean): void;
}

export interface LineSamples {
	/** Strictly increasing, on the recording's own clock. */
	tS: Float64Array;
	/** Same length; NaN breaks the line. */
	value: Float64Array;
	/** Readings farther apart than this are not joined, s. */
	gapS: number;
}

/** More readings a pixel than this are drawn as lowest to highest per column. */
const READINGS_PER_PX = 2;

/**
 * Distance above which two neighbouring readings are a gap, s: three times the usual spacing, or 2.2 times the spacing
 * that 95 % stay below, whichever is longer, so that a device that writes every 1 to 8 s is not torn to pieces.
 *
 * @returns Infinity for fewer than two readings
 */
export function gapLimitS(tS: Float64Array): number {
	if (tS.length < 2) return Infinity;
	const steps = new Float64Array(tS.length - 1);
	for (let i = 1; i < tS.length; i++) steps[i - 1] = tS[i] - tS[i - 1];
	steps.sort();
	const at = (share: number) => steps[Math.min(steps.length - 1, Math.floor(share * steps.length))];
	return Math.max(3 * at(0.5), 2.2 * at(0.95));
}

/** Index of the first entry that is at or after `t`. */
export function lowerBound(tS: Float64Array, t: number): number {
	let low = 0;
	let high = tS.length;
	while (low < high) {
		const middle = (low + high) >> 1;
		if (tS[middle] < t) low = middle + 1;
		else high = middle;
	}
	return low;
}

/**
 * Draws the part of a line that is in the frame, with one reading on either side so that it runs to the edges.
 *
 * @param y position of a value; clips to the frame itself
 * @param alignment where the recording's clock stands on the axis
 * @param firstS first sample of the recording, from which drift counts
 * @returns whether readings were drawn as columns: a dash pattern would mean nothing on such a line
 */
export function drawLine(
	sink: PathSink,
	samples: LineSamples,
	frame: TimeFrame,
	y: (value: number) => number,
	alignment: Pick<AlignmentState, 'offsetS' | 'driftPpm'>,
	firstS: number
): { dense: boolean } {
	const { tS, value, gapS } = samples;
	const rate = 1 + alignment.driftPpm * 1e-6;
	const ownAt = (axisS: number) => firstS + (axisS - alignment.offsetS - firstS) / rate;
	const from = Math.max(0, lowerBound(tS, ownAt(frame.fromS)) - 1);
	const to = Math.min(tS.length, lowerBound(tS, ownAt(frame.toS)) + 1);
	const perS = (frame.widthPx / Math.max(1e-9, frame.toS - frame.fromS)) * rate;
	const zeroS = ownAt(frame.fromS);
	const dense = to - from > READINGS_PER_PX * frame.widthPx;
	if (dense) drawColumns(sink, samples, from, to, (t) => (t - zeroS) * perS, y);
	else {
		let previous = -1;
		let started = 0;
		for (let i = from; i < to; i++) {
			if (Number.isNaN(value[i])) continue;
			const x = (tS[i] - zeroS) * perS;
			if (previous < 0 || tS[i] - tS[previous] > gapS || previous !== i - 1) {
				if (started === 1) markSingle(sink, (tS[previous] - zeroS) * perS, y(value[previous]));
				sink.moveTo(x, y(value[i]));
				started = 1;
			} else {
				sink.lineTo(x, y(value[i]));
				started++;
			}
			previous = i;
		}
		if (started === 1) markSingle(sink, (tS[previous] - zeroS) * perS, y(value[previous]));
	}
	return { dense };
}

/** A reading with a gap on both sides would leave no ink: it becomes a stroke of 2 px. */
function markSingle(sink: PathSink, x: number, y: number): void {
	sink.moveTo(x - 1, y);
	sink.lineTo(x + 1, y);
}

function drawColumns(
	sink: PathSink,
	{ tS, value, gapS }: LineSamples,
	from: number,
	to: number,
	x: (tS: number) => number,
	y: (value: number) => number
): void {
	let column = NaN;
	let lowest = 0;
	let highest = 0;
	let last = 0;
	let lastS = -Infinity;
	let leftAt = 0;
	let broken = true;
	const put = () => {
		if (Number.isNaN(column)) return;
		if (sink.column) {
			// Reaches to where the line left the column before, so that steep stretches stay one line.
			sink.column(column, y(broken ? highest : Math.max(highest, leftAt)), y(broken ? lowest : Math.min(lowest, leftAt)), !broken);
			leftAt = last;
			broken = false;
			return;
		}
		// From whichever end is nearer to where the line arrives, through the other, to where it leaves.
		const at = column + 0.5;
		if (broken) sink.moveTo(at, y(lowest));
		else sink.lineTo(at, y(lowest));
		if (highest !== lowest || broken) sink.lineTo(broken && highest === lowest ? at + 0.5 : at, y(highest));
		if (last !== highest) sink.lineTo(at, y(last));
		broken = false;
	};
	for (let i = from; i < to; i++) {
		if (Number.isNaN(value[i])) continue;
		const c = Math.floor(x(tS[i]));
		if (c !== column) {
			put();
			if (tS[i] - lastS > gapS) broken = true;
			column = c;
			lowest = highest = value[i];
		} else {
			if (value[i] < lowest) lowest = value[i];
			if (value[i] > highest) highest = value[i];
		}
		last = value[i];
		lastS = tS[i];
	}
	put();
}

/** The value at a moment of the recording's own clock, straight between neighbours; null inside a gap or outside. */
export function valueAt({ tS, value, gapS }: LineSamples, ownS: number): number | null {
	const after = lowerBound(tS, ownS);
	if (after < tS.length && tS[after] === ownS) return Number.isNaN(value[after]) ? null : value[after];
	if (after === 0 || after === tS.length) {
		// The last reading stands for the second that it was written for.
		const edge = after === 0 ? 0 : after - 1;
		return tS.length > 0 && Math.abs(tS[edge] - ownS) <= 0.5 && !Number.isNaN(value[edge]) ? value[edge] : null;
	}
	const spanS = tS[after] - tS[after - 1];
	if (spanS > gapS) return null;
	const between = value[after - 1] + ((value[after] - value[after - 1]) * (ownS - tS[after - 1])) / spanS;
	return Number.isNaN(between) ? null : between;
}

/**
 * A canvas path. Strokes and columns are apart: columns are filled as one shape between their upper and lower ends,
 * which costs a fraction of a stroke with its joins. Call `finish` when the line is drawn.
 */
export class CanvasLine implements PathSink {
	readonly stroke = new Path2D();
	readonly fill = new Path2D();
	private run: { x: number; fromY: number; toY: number }[] = [];
	constructor(private readonly widthPx: number) {}
	moveTo(x: number, y: number): void {
		this.stroke.moveTo(x, y);
	}
	lineTo(x: number, y: number): void {
		this.stroke.lineTo(x, y);
	}
	column(x: number, fromY: number, toY: number, joined: boolean): void {
		if (!joined) this.finish();
		const half = this.widthPx / 2;
		this.run.push({ x: x + 0.5, fromY: fromY - half, toY: toY + half });
	}
	finish(): void {
		const { run, fill, widthPx } = this;
		if (run.length > 0) {
			const first = run[0];
			const last = run[run.length - 1];
			fill.moveTo(first.x - widthPx / 2, first.toY);
			fill.lineTo(first.x - widthPx / 2, first.fromY);
			for (const { x, fromY } of run) fill.lineTo(x, fromY);
			fill.lineTo(last.x + widthPx / 2, last.fromY);
			fill.lineTo(last.x + widthPx / 2, last.toY);
			for (let i = run.length - 1; i >= 0; i--) fill.lineTo(run[i].x, run[i].toY);
			fill.closePath();
		}
		this.run = [];
	}
}

/** Collects a line as the text of an SVG path, to a tenth of a pixel. */
export class PathText implements PathSink {
	private parts: string[] = [];
	moveTo(x: number, y: number): void {
		this.parts.push(`M${x.toFixed(1)} ${y.toFixed(1)}`);
	}
	lineTo(x: number, y: number): void {
		this.parts.push(`L${x.toFixed(1)} ${y.toFixed(1)}`);
	}
	toString(): string {
		return this.parts.join('');
	}
}
