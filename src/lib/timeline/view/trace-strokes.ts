/** How each trace is stroked on a canvas: the same five signs as in the style sheet, as numbers. Number 0 is the reference. */
export interface TraceStroke {
	token: string;
	widthPx: number;
	dash: readonly number[];
}

const DASHES: readonly (readonly number[])[] = [[], [], [9, 2.5], [3.2, 2.2], [11, 2.5, 2, 2.5], [17, 4], [6, 2, 1.5, 2, 1.5, 2]];

/** Width of the well-coloured casing below the reference, px. */
export const CASING_PX = 5;

export function traceStroke(number: number, held: boolean): TraceStroke {
	if (number === 0) return { token: '--ref', widthPx: 2.6, dash: [] };
	return { token: `--t${number}`, widthPx: held ? 2 : 1.5, dash: DASHES[number] ?? [] };
}
