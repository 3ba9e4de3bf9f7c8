/** Seeded random numbers, so that every resampled interval can be made again. */

/**
 * Chris Doty-Humphrey's sfc32 (PractRand, 2010): small, fast, passes the usual batteries; 32 bits a call.
 * @param seed whole number, 0 to 2³² − 1; equal seeds give equal sequences
 */
export function sfc32(seed: number): () => number {
	let a = 0;
	let b = seed | 0;
	let c = 0x9e3779b9 | 0;
	let counter = 1;
	const next = () => {
		const t = (a + b + counter) | 0;
		counter = (counter + 1) | 0;
		a = b ^ (b >>> 9);
		b = (c + (c << 3)) | 0;
		c = (((c << 21) | (c >>> 11)) + t) | 0;
		return t >>> 0;
	};
	for (let i = 0; i < 15; i++) next();
	return next;
}

/** A number in [0, 1) with 53 random bits. */
export function uniform(next: () => number): number {
	return ((next() >>> 5) * 67108864 + (next() >>> 6)) / 9007199254740992;
}

/** A standard normal number (Box GEP, Muller ME 1958). */
export function gaussian(next: () => number): number {
	return Math.sqrt(-2 * Math.log(1 - uniform(next))) * Math.cos(2 * Math.PI * uniform(next));
}
