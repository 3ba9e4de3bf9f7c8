/** Reading a time that somebody typed. */
import { clockTime } from '../../text/figures';

export type ReadTime = { ok: true; axisS: number } | { ok: false; why: string };

const DAY_S = 86_400;

/**
 * `07:51`, `07:51:28`, `7:51:28.5` on the session's clock, or `+12`, `+12:30`, `+12.5` minutes after its start.
 * A clock time is taken on the day on which it falls into the session, also past midnight.
 *
 * @param fromS start of the session on its axis, epoch seconds
 * @param toS its end; a time outside is not accepted
 */
export function readTime(text: string, fromS: number, toS: number): ReadTime {
	const typed = text.trim();
	const after = /^\+\s*(\d+(?:\.\d+)?)(?::(\d{1,2}(?:\.\d+)?))?$/.exec(typed);
	const clock = /^(\d{1,2}):(\d{2})(?::(\d{2}(?:\.\d+)?))?$/.exec(typed);
	let axisS: number;
	if (after) axisS = fromS + Number(after[1]) * 60 + Number(after[2] ?? 0);
	else if (clock && Number(clock[1]) < 24 && Number(clock[2]) < 60 && Number(clock[3] ?? 0) < 60) {
		const timeOfDay = Number(clock[1]) * 3600 + Number(clock[2]) * 60 + Number(clock[3] ?? 0);
		axisS = Math.floor(fromS / DAY_S) * DAY_S + timeOfDay;
		while (axisS < fromS && axisS + DAY_S <= toS) axisS += DAY_S;
	} else return { ok: false, why: 'Write a time such as 07:51:28, or +12.5 for minutes from the start.' };
	if (axisS < fromS || axisS > toS) return { ok: false, why: `${clockTime(axisS)} lies outside the session, ${clockTime(fromS)} to ${clockTime(toS)}.` };
	return { ok: true, axisS };
}
