/** Shifts that look like a time-zone or summer-time mistake, in words. */

/** Clocks of phones and satellites stand within this of true time, s; zones differ by whole half hours. */
const NEAR_S = 150;

/** `a whole-hour mistake of +2 h (time zone or summer time)`, or null when the shift is no such thing. */
export function zoneWords(shiftS: number): string | null {
	const halves = Math.round(shiftS / 1800);
	if (halves === 0 || Math.abs(halves) > 28 || Math.abs(shiftS - halves * 1800) > NEAR_S) return null;
	const hours = Math.abs(halves) / 2;
	const sign = halves > 0 ? '+' : '\u2212';
	return halves % 2 === 0
		? `a whole-hour mistake of ${sign}${hours} h (time zone or summer time)`
		: `a half-hour mistake of ${sign}${hours} h (time zone)`;
}
