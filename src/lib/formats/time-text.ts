/** How the readers write a time and a span in their sentences. */

const YEAR_S = 31_557_600;

/**
 * A time stamp for a sentence: `2024-05-04 07:31:02 UTC`, or `0:12:03 after the start` where the file has no date
 * (times near 1970 are elapsed seconds).
 */
export function timeText(tS: number): string {
	if (!Number.isFinite(tS)) return 'an unknown time';
	if (tS >= 0 && tS < YEAR_S) {
		const whole = Math.floor(tS);
		const two = (n: number) => String(n).padStart(2, '0');
		return `${Math.floor(whole / 3600)}:${two(Math.floor(whole / 60) % 60)}:${two(whole % 60)} after the start`;
	}
	const date = new Date(tS * 1000);
	if (Number.isNaN(date.getTime())) return 'an impossible time';
	return date
		.toISOString()
		.replace('T', ' ')
		.replace(/\.\d+Z$/, ' UTC');
}

/** A span for a sentence: `47 s`, `18 min`, `2 h 5 min`, `27 days`. */
export function spanText(seconds: number): string {
	const s = Math.abs(seconds);
	if (s < 10) return `${Number(s.toFixed(1))} s`;
	if (s < 120) return `${Math.round(s)} s`;
	if (s < 3600) return `${Math.round(s / 60)} min`;
	if (s < 172_800) {
		const minutes = Math.round(s / 60);
		return minutes % 60 ? `${Math.floor(minutes / 60)} h ${minutes % 60} min` : `${minutes / 60} h`;
	}
	return `${Math.round(s / 86_400)} days`;
}

/** `1 record`, `12 records`. */
export function counted(n: number, one: string, many = `${one}s`): string {
	return `${n} ${n === 1 ? one : many}`;
}
