/** Correlation against shift as lines for the offset rule: gaps where too little overlaps, and the value at one shift. */
import type { ShiftCurve } from '../../signal/shift';

/** r at a shift, straight between the curve's points; null outside it and where it is not determinable. */
export function correlationAt(curve: ShiftCurve, shiftS: number): number | null {
	const { shiftS: at, r } = curve;
	if (at.length === 0 || shiftS < at[0] || shiftS > at[at.length - 1]) return null;
	let low = 0;
	let high = at.length - 1;
	while (high - low > 1) {
		const middle = (low + high) >> 1;
		if (at[middle] <= shiftS) low = middle;
		else high = middle;
	}
	const on = shiftS === at[low] ? low : shiftS === at[high] ? high : null;
	if (on !== null) return Number.isNaN(r[on]) ? null : r[on];
	const between = r[low] + ((r[high] - r[low]) * (shiftS - at[low])) / (at[high] - at[low]);
	return Number.isNaN(between) ? null : between;
}

/** Lowest and highest r of the part of a curve between two shifts; null where nothing is determinable there. */
export function correlationRange(curve: ShiftCurve, fromS: number, toS: number): { low: number; high: number } | null {
	let low = Infinity;
	let high = -Infinity;
	curve.shiftS.forEach((s, i) => {
		const r = curve.r[i];
		if (s < fromS || s > toS || Number.isNaN(r)) return;
		low = Math.min(low, r);
		high = Math.max(high, r);
	});
	return low > high ? null : { low, high };
}

/** Path text of a curve; broken where r is not determinable. */
export function curvePath(curve: ShiftCurve, x: (shiftS: number) => number, y: (r: number) => number): string {
	const parts: string[] = [];
	let on = false;
	curve.shiftS.forEach((s, i) => {
		if (Number.isNaN(curve.r[i])) {
			on = false;
			return;
		}
		parts.push(`${on ? 'L' : 'M'}${x(s).toFixed(1)} ${y(curve.r[i]).toFixed(1)}`);
		on = true;
	});
	return parts.join('');
}
