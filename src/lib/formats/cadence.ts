/**
 * Cadence on foot in steps a minute.
 *
 * Most files count one foot (strides a minute) for running and walking; some already count both; some write 0
 * throughout. Which it is cannot be read from a field, only from the size of the values.
 */
import type { ReadingWarning } from './recording';
import type { SampleTable } from './sample-table';
import { counted } from './time-text';

/** Activities in which a cadence counts feet. */
const ON_FOOT = /\b(run|running|jog|jogging|walk|walking|hik|hike|hiking|treadmill|trail)/i;
const WALKING = /walk|hik/i;

/** True where the file's word for the activity means running, walking or hiking. */
export function isOnFoot(activity: string | null): boolean {
	return activity !== null && ON_FOOT.test(activity);
}

/**
 * Doubles the cadence of the given rows where it counts one foot only.
 *
 * Strides of runners lie between 60 and 110 a minute, steps between 120 and 220; of walkers between 40 and 70, and
 * between 80 and 140 (common practice, no source): the median of the values other than 0 decides, for all rows alike.
 *
 * @param table rows with a `cadence` column; changed in place
 * @param rows indices of the rows of one bout on foot
 * @param activity the file's word, for the sentence and for the bound
 * @returns what was done, or null where there is no cadence
 */
export function toSteps(table: SampleTable, rows: number[], activity: string): ReadingWarning | null {
	const cadence = table.column('cadence');
	if (!cadence) return null;
	const moving = rows.map((row) => cadence[row]).filter((value) => value > 0);
	if (moving.length === 0) return null;
	moving.sort((a, b) => a - b);
	const median = moving[moving.length >> 1];
	if (median > (WALKING.test(activity) ? 80 : 120))
		return {
			code: 'cadence-in-steps',
			message: `The cadence of the ${activity} (median ${Math.round(median)} a minute) already counts both feet and is kept as it is.`
		};
	for (const row of rows) cadence[row] *= 2;
	return {
		code: 'cadence-doubled',
		message: `The cadence of the ${activity} counts one foot (median ${Math.round(median)} strides a minute). ${counted(moving.length, 'value')} doubled to steps a minute.`
	};
}
