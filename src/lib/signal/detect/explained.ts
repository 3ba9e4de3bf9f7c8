/** Whether a stretch is what the device would show if its sensor followed something else than the heart for a while. */
import type { CadenceBand } from './cadence-seconds';
import type { CommonSeconds } from './common-seconds';
import { medianOf, type Region } from './regions';
import type { Smoother } from './response-like';

export type Source = 'half' | 'double' | 'cadence' | 'half cadence' | 'twice cadence' | 'flattened';

export interface Explanation {
	source: Source;
	/** Share of the stretch's seconds within `NEAR_BPM` of what the device would show. */
	share: number;
	/** Median distance from it, bpm. */
	misfitBpm: number;
}

const NEAR_BPM = 5;
/** The other source may have begun this long before the stretch shows, and ended before it by these multiples of the device's delay, s. */
const EARLIER_S = [0, 4, 9] as const;
const DELAYS_BEFORE_END = [0, 0.5, 1, 1.7, 2.5, 3.5] as const;
/** Shares of a peak that a flattening device leaves. */
const FLATTENED = [0.05, 0.2, 0.35] as const;
/** No device counts more, bpm. */
const CEILING_BPM = 225;
/** Stretches are looked at this far; the rest of a longer one is alike. */
const LONGEST_S = 900;

/** The best explanation by each source, best first. */
export function explanations(common: CommonSeconds, band: CadenceBand | null, region: Region): Explanation[] {
	const to = Math.min(region.to, region.from + LONGEST_S);
	const bounded = { from: region.from, to };
	const found: Explanation[] = [];
	const offer = (source: Source, replaced: (i: number) => number) => {
		const best = bestFit(common, bounded, replaced);
		if (best) found.push({ source, ...best });
	};
	const { source: heart } = common;
	offer('half', (i) => heart[i] / 2);
	offer('double', (i) => Math.min(CEILING_BPM, heart[i] * 2));
	if (band) {
		const middle = (i: number) => (band.low[i] + band.high[i]) / 2;
		offer('cadence', middle);
		offer('half cadence', (i) => middle(i) / 2);
		offer('twice cadence', (i) => Math.min(CEILING_BPM, 2 * middle(i)));
	}
	const base = heart[Math.max(0, region.from - 4)];
	for (const share of FLATTENED) offer('flattened', (i) => (heart[i] > base ? base + (heart[i] - base) * share : heart[i]));
	return found.sort((a, b) => b.share - a.share || a.misfitBpm - b.misfitBpm);
}

function bestFit(common: CommonSeconds, region: Region, replaced: (i: number) => number): { share: number; misfitBpm: number } | null {
	const { smoother, source, wearable } = common;
	const delayS = smoother.tauS + smoother.windowS / 2;
	// The smoother needs to forget where it began.
	const begin = Math.max(0, region.from - Math.round(3 * smoother.tauS + smoother.windowS) - 12);
	const length = region.to - region.from;
	const seen = new Set<number>();
	let best: { share: number; misfitBpm: number } | null = null;
	const simulated = new Float64Array(region.to - begin);
	const away = new Float64Array(length);
	for (const earlier of EARLIER_S) {
		for (const delays of DELAYS_BEFORE_END) {
			const from = region.from - earlier;
			const until = Math.round(region.to - delays * delayS);
			if (until - from < Math.min(length, 8) || seen.has(until * 16 + earlier)) continue;
			seen.add(until * 16 + earlier);
			for (let i = begin; i < region.to; i++) {
				const other = i >= from && i < until ? replaced(i) : NaN;
				simulated[i - begin] = other === other ? other : source[i];
			}
			smoothInPlace(simulated, smoother);
			let near = 0;
			let n = 0;
			for (let i = region.from; i < region.to; i++) {
				const e = Math.abs(wearable[i] - simulated[i - begin]);
				away[i - region.from] = e;
				if (e !== e) continue;
				n++;
				if (e <= NEAR_BPM) near++;
			}
			if (n < length / 2) continue;
			const share = near / n;
			if (!best || share > best.share) best = { share, misfitBpm: medianOf(away) };
		}
	}
	return best;
}

/** Moving average, then first order; holes are stepped over. */
function smoothInPlace(value: Float64Array, { tauS, windowS }: Smoother): void {
	if (windowS > 0) {
		const raw = value.slice();
		let sum = 0;
		let n = 0;
		for (let i = 0; i < value.length; i++) {
			if (raw[i] === raw[i]) {
				sum += raw[i];
				n++;
			}
			const leaving = i >= windowS ? raw[i - windowS] : NaN;
			if (leaving === leaving) {
				sum -= leaving;
				n--;
			}
			value[i] = n > 0 ? sum / n : NaN;
		}
	}
	if (tauS > 0) {
		const keep = Math.exp(-1 / tauS);
		let state = NaN;
		for (let i = 0; i < value.length; i++) {
			if (value[i] === value[i]) state = state === state ? keep * state + (1 - keep) * value[i] : value[i];
			value[i] = state;
		}
	}
}
