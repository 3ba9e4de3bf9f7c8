/** What a stretch of disagreement is: asked in a fixed order, the sharper marks first. */
import type { CadenceBand } from './cadence-seconds';
import type { CommonSeconds } from './common-seconds';
import { prominentPeaks, type Peak } from './peak-prominence';
import { asScore, rising, type Proposal, type ProposedKind } from './proposal';
import { coveredShare, disagreeingRegions, medianOf, type Region } from './regions';
import { course, duration, whole } from './words';

const ONSET_WITHIN_S = 20;
const ONSET_SHORTEST_S = 12;
const ONSET_LONGEST_S = 260;
const ONSET_BACK_INSIDE_S = 12;
const SPIKE_LONGEST_S = 6;
const SPIKE_STEP_BPM = 12;
const HALF_RATIO = [0.42, 0.58] as const;
const DOUBLE_RATIO = [1.75, 2.25] as const;
const RATIO_SHARE = 0.5;
const RATIO_SHORTEST_S = 10;
/** Level of the region against the level before it. */
const HALF_DROP = 0.78;
const DOUBLE_RISE = 1.3;
const BEFORE_S = 30;
const LOCK_NEAR_BPM = 5;
const LOCK_SHARE = 0.6;
const LOCK_SHORTEST_S = 20;
const LOCK_MERGE_S = 60;
const LOCK_MULTIPLES = [1, 0.5, 2] as const;
const PEAK_PROMINENCE_BPM = 12;
const PEAK_AROUND_S = 15;
const MOTION_MERGE_S = 15;

interface Found extends Region {
	kind: ProposedKind | 'deviation';
	score: number;
	evidence: string;
}

/** @param taken seconds that are explained already: frozen values */
export function classifiedRegions(common: CommonSeconds, band: CadenceBand | null, taken: readonly Region[]): Proposal[] {
	const regions = disagreeingRegions(common.excess).filter((r) => coveredShare(r, taken) < 0.5);
	const peaks = prominentPeaks(common.expected, PEAK_PROMINENCE_BPM);
	const onset = onsetOf(common, band, regions);
	const found: Found[] = onset ? [onset] : [];
	for (const region of regions) {
		if (onset && region.from < onset.to) continue;
		found.push(
			spike(common, region) ?? ratioKind(common, band, region) ?? lock(common, band, region) ?? missedPeak(common, peaks, region) ?? motion(common, region)
		);
	}
	return merged(found).flatMap((f): Proposal[] =>
		f.kind === 'deviation' ? [] : [{ kind: f.kind, on: 'wearable', startS: common.startS + f.from, endS: common.startS + f.to, score: f.score, evidence: f.evidence }]
	);
}

function onsetOf(common: CommonSeconds, band: CadenceBand | null, regions: readonly Region[]): Found | null {
	const first = common.excess.findIndex((e) => !Number.isNaN(e));
	const begin = regions.findIndex((r) => r.from <= first + ONSET_WITHIN_S);
	if (first < 0 || begin < 0) return null;
	const region = { ...regions[begin] };
	for (let k = begin + 1; k < regions.length && regions[k].from - region.to <= ONSET_BACK_INSIDE_S; k++) region.to = regions[k].to;
	const lengthS = region.to - region.from;
	if (lengthS < ONSET_SHORTEST_S || region.from > 90) return null;
	if (region.from > 8 && (ratioKind(common, band, region) ?? lock(common, band, region))) return null;
	region.to = Math.min(region.to, region.from + ONSET_LONGEST_S);
	// Where the reference cannot be compared at first, the wearable was no better then.
	if (region.from <= first + 2 && first < 120) region.from = 0;
	const off = largest(common, region);
	return {
		...region,
		kind: 'onset-delay',
		score: asScore(0.3 + 0.4 * rising(off, 6, 10) + 0.3 * rising(lengthS, ONSET_SHORTEST_S, 25)),
		evidence: `Off by up to ${whole(off)} bpm for the first ${duration(region.to)} of the recording, then with the reference.`
	};
}

function spike(common: CommonSeconds, region: Region): Found | null {
	if (region.to - region.from > SPIKE_LONGEST_S) return null;
	let step = 0;
	for (let i = Math.max(1, region.from); i <= region.to && i < common.length; i++) step = Math.max(step, Math.abs(common.wearable[i] - common.wearable[i - 1]) || 0);
	if (step < SPIKE_STEP_BPM) return null;
	return {
		...region,
		kind: 'spike',
		score: asScore(0.4 + 0.6 * rising(step, SPIKE_STEP_BPM, 15)),
		evidence: `Leaps by ${whole(step)} bpm and is back within ${duration(region.to - region.from)}.`
	};
}

function ratioKind(common: CommonSeconds, band: CadenceBand | null, region: Region): Found | null {
	const lengthS = region.to - region.from;
	if (lengthS < RATIO_SHORTEST_S) return null;
	const ratios: number[] = [];
	for (let i = region.from; i < region.to; i++) ratios.push(common.wearable[i] / common.expected[i]);
	const within = (low: number, high: number) => ratios.filter((r) => r >= low && r <= high).length / lengthS;
	const half = within(...HALF_RATIO);
	const double = within(...DOUBLE_RATIO);
	if (half < RATIO_SHARE && double < RATIO_SHARE) return null;
	const before = levelBefore(common, region);
	const level = medianOf(common.wearable.subarray(region.from, region.to));
	const isHalf = half >= RATIO_SHARE;
	if (isHalf ? !(level < HALF_DROP * before) : !(level > DOUBLE_RISE * before)) return null;
	// Cadence may stand at half or twice the heart rate by chance: then the course decides.
	const locked = lock(common, band, region);
	if (locked && misfitToCadence(common, band, region) < misfitToRatio(common, region, isHalf ? 0.5 : 2)) return null;
	return {
		...region,
		kind: isHalf ? 'half-rate' : 'double-rate',
		score: asScore(0.3 + 0.5 * (isHalf ? half : double) + 0.2 * rising(lengthS, RATIO_SHORTEST_S, 20)),
		evidence: `Reads ${isHalf ? 'half' : 'twice'} of the reference for ${duration(lengthS)}: ${whole(level)} where the reference shows ${whole(medianOf(common.expected.subarray(region.from, region.to)))}.`
	};
}

/** Median size of what is left when the wearable is taken for a multiple of the reference, bpm. */
function misfitToRatio(common: CommonSeconds, region: Region, ratio: number): number {
	const left: number[] = [];
	for (let i = region.from; i < region.to; i++) left.push(Math.abs(common.wearable[i] - ratio * common.expected[i]));
	return medianOf(left);
}

function misfitToCadence(common: CommonSeconds, band: CadenceBand | null, region: Region): number {
	if (!band) return Infinity;
	return Math.min(
		...LOCK_MULTIPLES.map((multiple) => {
			const left: number[] = [];
			for (let i = region.from; i < region.to; i++) left.push(Math.abs(common.wearable[i] - (multiple * (band.low[i] + band.high[i])) / 2));
			return medianOf(left);
		})
	);
}

function lock(common: CommonSeconds, band: CadenceBand | null, region: Region): Found | null {
	const lengthS = region.to - region.from;
	if (!band || lengthS < LOCK_SHORTEST_S) return null;
	let best = { near: 0, multiple: 1 };
	for (const multiple of LOCK_MULTIPLES) {
		let near = 0;
		for (let i = region.from; i < region.to; i++) {
			const w = common.wearable[i];
			if (w >= multiple * band.low[i] - LOCK_NEAR_BPM && w <= multiple * band.high[i] + LOCK_NEAR_BPM) near++;
		}
		if (near > best.near) best = { near, multiple };
	}
	if (best.near < LOCK_SHARE * lengthS) return null;
	const level = medianOf(band.low.subarray(region.from, region.to));
	const of = best.multiple === 1 ? 'cadence' : best.multiple === 2 ? 'twice the cadence' : 'half of the cadence';
	return {
		...region,
		kind: 'cadence-lock',
		score: asScore(0.2 + 0.5 * (best.near / lengthS) + 0.3 * rising(lengthS, LOCK_SHORTEST_S, 30)),
		evidence: `Stays within ${LOCK_NEAR_BPM} bpm of ${of} (${whole(level)} a minute) for ${duration(best.near)} while the reference ${course(common.expected[region.from], common.expected[region.to - 1])}.`
	};
}

function missedPeak(common: CommonSeconds, peaks: readonly Peak[], region: Region): Found | null {
	let below = 0;
	for (let i = region.from; i < region.to; i++) if (common.excess[i] < 0) below++;
	if (below < 0.7 * (region.to - region.from)) return null;
	for (const peak of peaks) {
		if (peak.at < region.from - PEAK_AROUND_S || peak.at >= region.to + PEAK_AROUND_S) continue;
		let highest = -Infinity;
		for (let i = Math.max(0, peak.at - PEAK_AROUND_S); i <= Math.min(common.length - 1, peak.at + PEAK_AROUND_S); i++) if (common.wearable[i] > highest) highest = common.wearable[i];
		const short = peak.height - highest;
		if (!(short >= Math.max(8, 0.4 * Math.min(peak.prominence, 40)))) continue;
		return {
			...region,
			kind: 'missed-peak',
			score: asScore(0.3 + 0.7 * rising(short / peak.prominence, 0.2, 0.3)),
			evidence: `The reference peaks at ${whole(peak.height)}; the wearable stays at or below ${whole(highest)} around it, ${whole(short)} bpm short.`
		};
	}
	return null;
}

function motion(common: CommonSeconds, region: Region): Found {
	const lengthS = region.to - region.from;
	const off = largest(common, region);
	return {
		...region,
		kind: 'motion-artefact',
		score: asScore(0.2 + 0.5 * rising(off, 6, 12)),
		evidence: `Jagged for ${duration(lengthS)}, up to ${whole(off)} bpm from the reference, and follows neither heart nor cadence.`
	};
}

function largest(common: CommonSeconds, region: Region): number {
	let most = 0;
	for (let i = region.from; i < region.to; i++) most = Math.max(most, Math.abs(common.wearable[i] - common.expected[i]) || 0);
	return most;
}

const levelBefore = (common: CommonSeconds, region: Region): number => {
	const level = medianOf(common.wearable.subarray(Math.max(0, region.from - BEFORE_S), Math.max(0, region.from - 2)));
	return Number.isNaN(level) ? medianOf(common.expected.subarray(region.from, region.to)) : level;
};

/** Pieces of one lock, and of one shaking, are one. */
function merged(found: Found[]): Found[] {
	const out: Found[] = [];
	for (const f of found.sort((a, b) => a.from - b.from)) {
		const before = out.findLast((o) => o.kind === f.kind);
		const within = f.kind === 'cadence-lock' ? LOCK_MERGE_S : f.kind === 'motion-artefact' ? MOTION_MERGE_S : 0;
		if (before && within > 0 && f.from - before.to <= within) {
			before.to = f.to;
			before.score = Math.max(before.score, f.score);
		} else out.push(f);
	}
	return out;
}
