/** Stretches without movement, for the word on the cadence lane. */
import type { LineSamples } from './line-path';

/** Shorter stops than this are not named, s. */
const LEAST_STAND_S = 8;

/**
 * Where the wearer stands: no cadence, or none recorded, between two readings of cadence.
 *
 * @returns spans on the recording's own clock; before the first and after the last reading nothing is known
 */
export function stands({ tS, value, gapS }: LineSamples): { startS: number; endS: number }[] {
	const found: { startS: number; endS: number }[] = [];
	let fromS: number | null = null;
	for (let i = 0; i < tS.length; i++) {
		const moves = value[i] > 0;
		if (i > 0 && tS[i] - tS[i - 1] > gapS && fromS === null) fromS = tS[i - 1];
		if (!moves && fromS === null) fromS = tS[i];
		if (moves && fromS !== null) {
			if (tS[i] - fromS >= LEAST_STAND_S) found.push({ startS: fromS, endS: tS[i] });
			fromS = null;
		}
	}
	return found;
}
