/**
 * Random numbers that are the same on every machine: one generator, one named stream per purpose, so that a new
 * parameter somewhere does not move what other parts draw.
 *
 * Generator: sfc32 (Chris Doty-Humphrey, PractRand; public domain), seeded by a 32-bit hash of seed and stream name.
 */
export interface RandomStream {
	/** Uniform in [0, 1). */
	unit(): number;
	uniform(low: number, high: number): number;
	/** Uniform in the logarithm; both ends > 0. */
	logUniform(low: number, high: number): number;
	/** Standard normal (Box and Muller 1958). */
	normal(): number;
	/** Exponential with this mean. */
	exponential(mean: number): number;
	/** Whole number in [low, high]. */
	whole(low: number, high: number): number;
	chance(probability: number): boolean;
	pick<T>(items: readonly T[]): T;
}

function hash32(text: string, seed: number): number {
	let h = 2166136261 ^ seed;
	for (let i = 0; i < text.length; i++) {
		h ^= text.charCodeAt(i);
		h = Math.imul(h, 16777619);
	}
	h ^= h >>> 16;
	h = Math.imul(h, 2246822507);
	h ^= h >>> 13;
	h = Math.imul(h, 3266489909);
	return (h ^ (h >>> 16)) >>> 0;
}

/** The stream called `name` of a seed: same seed and name, same numbers. */
export function randomStream(seed: number, name: string): RandomStream {
	const whole = Math.floor(seed) | 0;
	let a = hash32(name, whole);
	let b = hash32(`${name}/b`, whole ^ 0x9e3779b9);
	let c = hash32(`${name}/c`, Math.floor(seed / 4294967296) | 0);
	let d = 1;
	const next = () => {
		const t = (((a + b) | 0) + d) | 0;
		d = (d + 1) | 0;
		a = b ^ (b >>> 9);
		b = (c + (c << 3)) | 0;
		c = (c << 21) | (c >>> 11);
		c = (c + t) | 0;
		return (t >>> 0) / 4294967296;
	};
	for (let i = 0; i < 15; i++) next();
	let spare: number | null = null;
	const stream: RandomStream = {
		unit: next,
		uniform: (low, high) => low + (high - low) * next(),
		logUniform: (low, high) => Math.exp(Math.log(low) + (Math.log(high) - Math.log(low)) * next()),
		normal() {
			if (spare !== null) {
				const value = spare;
				spare = null;
				return value;
			}
			const radius = Math.sqrt(-2 * Math.log(1 - next()));
			const angle = 2 * Math.PI * next();
			spare = radius * Math.sin(angle);
			return radius * Math.cos(angle);
		},
		exponential: (mean) => -mean * Math.log(1 - next()),
		whole: (low, high) => low + Math.floor((high - low + 1) * next()),
		chance: (probability) => next() < probability,
		pick: (items) => items[Math.floor(next() * items.length)]
	};
	return stream;
}

/** Ornstein-Uhlenbeck noise on a grid: stationary, standard deviation `sd`, correlation time `tauS`. */
export function ouNoise(stream: RandomStream, n: number, dtS: number, sd: number, tauS: number): Float64Array {
	const keep = Math.exp(-dtS / tauS);
	const kick = sd * Math.sqrt(1 - keep * keep);
	const out = new Float64Array(n);
	let value = sd * stream.normal();
	for (let i = 0; i < n; i++) {
		out[i] = value;
		value = keep * value + kick * stream.normal();
	}
	return out;
}
