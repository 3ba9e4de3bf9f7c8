/** Ticks of a band's clock rule: minutes or hours, whatever the width lets stand apart. */
export interface ClockTick {
	tS: number;
	rank: 'major' | 'middle' | 'minor';
}

/** Distances of labelled, middle and small ticks, minutes. */
const STEPS: [number, number, number][] = [
	[5, 1, 1],
	[15, 5, 1],
	[30, 10, 5],
	[60, 15, 5],
	[180, 60, 15],
	[720, 180, 60]
];
/** Least distance of two labels, px. */
const LABEL_PX = 96;

/** @returns ticks between the two moments, in order; labelled ones are `major` */
export function clockTicks(fromS: number, toS: number, widthPx: number): ClockTick[] {
	const pxPerMin = widthPx / Math.max((toS - fromS) / 60, 1 / 60);
	const [major, middle, minor] = STEPS.find(([label]) => label * pxPerMin >= LABEL_PX) ?? STEPS[STEPS.length - 1];
	const ticks: ClockTick[] = [];
	for (let minute = Math.ceil(fromS / 60 / minor) * minor; minute * 60 <= toS; minute += minor) {
		ticks.push({ tS: minute * 60, rank: minute % major === 0 ? 'major' : minute % middle === 0 ? 'middle' : 'minor' });
	}
	return ticks;
}
