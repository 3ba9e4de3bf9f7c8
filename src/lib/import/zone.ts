/** Whole and half hours between clocks: what a wrong time zone looks like. */
export const ZONE_STEP_S = 1800;
/** The widest two zones apart, and daylight saving. */
export const FARTHEST_ZONE_SHIFT_S = 14.5 * 3600;

/**
 * The zone shift that an offset stands for, seconds; null when it is no whole or half hour give or take five minutes
 * (a clock that was never set is a question for the analyst, not a zone).
 */
export function zoneShiftOf(offsetS: number): number | null {
	const zoneShiftS = Math.round(offsetS / ZONE_STEP_S) * ZONE_STEP_S;
	if (zoneShiftS === 0 || Math.abs(zoneShiftS) > FARTHEST_ZONE_SHIFT_S) return null;
	return Math.abs(offsetS - zoneShiftS) <= 300 ? zoneShiftS : null;
}
