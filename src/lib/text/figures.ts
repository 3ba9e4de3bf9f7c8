/** How figures are written everywhere: true minus sign, fixed decimals, "not determinable" as a dash with words elsewhere. */
const MINUS = '\u2212';

/** `-3.2` as `−3.2`; never `−0.0`. */
export function fixed(value: number, decimals: number): string {
	const text = Math.abs(value).toFixed(decimals);
	return value < 0 && Number(text) !== 0 ? MINUS + text : text;
}

/** With its sign, `+3.42`, `−1.18`, `0.00`. */
export function signed(value: number, decimals: number): string {
	const text = fixed(value, decimals);
	return value > 0 && Number(text) !== 0 ? '+' + text : text;
}

/** A share 0..1 as a per cent figure without its sign: `88.0`. */
export function percent(share: number, decimals = 1): string {
	return fixed(share * 100, decimals);
}

/** Seconds of a day, or epoch seconds with an offset from UTC, as `07:51:28` or with decimals `07:51:28.00`. */
export function clockTime(epochS: number, decimals = 0, utcOffsetS = 0): string {
	const scale = 10 ** decimals;
	const total = Math.round((epochS + utcOffsetS) * scale) / scale;
	const day = ((total % 86400) + 86400) % 86400;
	const h = Math.floor(day / 3600);
	const m = Math.floor((day % 3600) / 60);
	const s = day - h * 3600 - m * 60;
	const two = (n: number) => String(n).padStart(2, '0');
	return `${two(h)}:${two(m)}:${s.toFixed(decimals).padStart(decimals ? 3 + decimals : 2, '0')}`;
}

/** `82 s`, `4 min 10 s`, `1 h 12 min`. */
export function duration(seconds: number): string {
	const s = Math.round(seconds);
	if (s < 120) return `${s} s`;
	if (s < 3600) return s % 60 && s < 600 ? `${Math.floor(s / 60)} min ${s % 60} s` : `${Math.round(s / 60)} min`;
	const minutes = Math.round(s / 60);
	return `${Math.floor(minutes / 60)} h ${minutes % 60} min`;
}
