/** Seeded random numbers, so that every resampled interval can be made again. */

/**
 * Chris Doty-Humphrey's sfc32 (PractRand, 2010): small, fast, passes the usual batteries; 32 bits a draw.
 * Equal seeds give equal sequences, whether drawn one at a time or in blocks.
 */
export class Sfc32 {
	private a = 0;
	private b: number;
	private c = 0x9e3779b9 | 0;
	private counter = 1;

	/** @param seed whole number, 0 to 2³² − 1 */
	constructor(seed: number) {
		this.b = seed | 0;
		this.fill(new Uint32Array(15));
	}

	/** Fill a block: the state stays in registers, which is several times faster than one call a number. */
	fill(block: Uint32Array): void {
		let { a, b, c, counter } = this;
		for (let i = 0; i < block.length; i++) {
			const t = (a + b + counter) | 0;
			counter = (counter + 1) | 0;
			a = b ^ (b >>> 9);
			b = (c + (c << 3)) | 0;
			c = (((c << 21) | (c >>> 11)) + t) | 0;
			block[i] = t;
		}
		this.a = a;
		this.b = b;
		this.c = c;
		this.counter = counter;
	}
}

/** One 32-bit number a call. @param seed whole number, 0 to 2³² − 1 */
export function sfc32(seed: number): () => number {
	const generator = new Sfc32(seed);
	const block = new Uint32Array(64);
	let used = block.length;
	return () => {
		if (used === block.length) {
			generator.fill(block);
			used = 0;
		}
		return block[used++];
	};
}

/** A number in [0, 1) with 53 random bits. */
export function uniform(next: () => number): number {
	return ((next() >>> 5) * 67108864 + (next() >>> 6)) / 9007199254740992;
}

/** A standard normal number (Box GEP, Muller ME 1958). */
export function gaussian(next: () => number): number {
	return Math.sqrt(-2 * Math.log(1 - uniform(next))) * Math.cos(2 * Math.PI * uniform(next));
}
