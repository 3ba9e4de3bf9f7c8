/** How seconds on the session axis become pixels across the bench, and the ticks that stand on it. */
import { clockTime } from '../../text/figures';

export interface TimeFrame {
	/** Shown part of the session axis, epoch seconds on the reference's clock. */
	fromS: number;
	toS: number;
	/** Width of the field in CSS pixels, without the margin for the end labels. */
	widthPx: number;
}

export const pxPerS = (frame: TimeFrame): number => frame.widthPx / Math.max(1e-9, frame.toS - frame.fromS);

/** Position of a time, px from the left of the field, unrounded. */
export const timeX = (tS: number, frame: TimeFrame): number => (tS - frame.fromS) * pxPerS(frame);

/** Time at a position. */
export const timeAt = (x: number, frame: TimeFrame): number => frame.fromS + x / pxPerS(frame);

export type TickRank = 'labelled' | 'middle' | 'small';
export interface TimeTick {
	tS: number;
	x: number;
	rank: TickRank;
	/** Clock time, on labelled ticks only. */
	label: string | null;
}

/** Labelled step, middle step and small step, s: each divides the one before it. */
const STEPS_S: readonly (readonly [number, number, number])[] = [
	[1, 0.5, 0.1],
	[2, 1, 0.2],
	[5, 1, 0.5],
	[10, 5, 1],
	[30, 10, 5],
	[60, 30, 5],
	[120, 60, 10],
	[300, 60, 30],
	[600, 300, 60],
	[900, 300, 60],
	[1800, 600, 300],
	[3600, 1800, 300],
	[7200, 3600, 600],
	[14_400, 3600, 1800],
	[43_200, 14_400, 3600],
	[86_400, 21_600, 7200]
];

/** Seconds of the longest labelled step whose labels keep `labelGapPx` and whose small ticks keep 3 px. */
export function tickSteps(frame: TimeFrame, labelGapPx = 66): readonly [number, number, number] {
	const px = pxPerS(frame);
	return STEPS_S.find(([labelled, , small]) => labelled * px >= labelGapPx && small * px >= 3) ?? STEPS_S[STEPS_S.length - 1];
}

/** How the label of a tick is written at a step: minutes where the step is whole minutes, else seconds. */
export const tickLabel = (tS: number, stepS: number): string => (stepS % 60 === 0 ? clockTime(tS).slice(0, 5) : clockTime(tS));

/**
 * Ticks of a clock across the field.
 *
 * @param frame what is shown, on the session axis
 * @param shiftS seconds that the axis is ahead of the clock whose ticks are asked for: 0 for the reference, the offset
 *   for a wearable's own clock. A tick that the clock calls 07:46:00 stands at 07:46:00 + shiftS on the axis.
 */
export function timeTicks(frame: TimeFrame, shiftS = 0): TimeTick[] {
	const [labelled, middle, small] = tickSteps(frame);
	const first = Math.ceil((frame.fromS - shiftS) / small - 1e-9);
	const last = Math.floor((frame.toS - shiftS) / small + 1e-9);
	const isMultiple = (tS: number, step: number) => Math.abs(tS / step - Math.round(tS / step)) < 1e-6;
	const ticks: TimeTick[] = [];
	for (let i = first; i <= last; i++) {
		const tS = i * small;
		const rank = isMultiple(tS, labelled) ? 'labelled' : isMultiple(tS, middle) ? 'middle' : 'small';
		ticks.push({ tS, x: timeX(tS + shiftS, frame), rank, label: rank === 'labelled' ? tickLabel(tS, labelled) : null });
	}
	return ticks;
}
