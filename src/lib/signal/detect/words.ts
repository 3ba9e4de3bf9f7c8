/** Numbers as the evidence says them. */

/** `64 s`, `2 min 5 s`, `1 h 4 min`. */
export function duration(seconds: number): string {
	const s = Math.round(seconds);
	if (s < 120) return `${s} s`;
	const minutes = Math.floor(s / 60);
	if (minutes < 60) return s % 60 === 0 ? `${minutes} min` : `${minutes} min ${s % 60} s`;
	return `${Math.floor(minutes / 60)} h ${minutes % 60} min`;
}

export const whole = (value: number): string => String(Math.round(value)).replace('-', '−');

/** `falls from 173 to 134`, `rises from 88 to 120`, `stays near 140`. */
export function course(from: number, to: number): string {
	if (Math.abs(to - from) < 4) return `stays near ${whole((from + to) / 2)}`;
	return `${to > from ? 'rises' : 'falls'} from ${whole(from)} to ${whole(to)}`;
}
