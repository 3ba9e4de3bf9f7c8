/** What a stretch of disagreement is: asked in a fixed order, the sharper marks first. */
import type { CadenceBand } from './cadence-seconds';
import type { CommonSeconds } from './common-seconds';
import { explanations } from './explained';
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
const SOURCE_SHORTEST_S = 8;
const SOURCE_SHARE = 0.65;
const LOCK_SHORTEST_S = 12;
const LOCK_MERGE_S = 60;
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
	const regions = disagreeingRegions(common.excess, common.read).filter((r) => coveredShare(r, taken) < 0.5);
	const peaks = prominentPeaks(common.expected, PEAK_PROMINENCE_BPM);
	const onset = onsetOf(common, band, regions);
	const found: Found[] = onset ? [onset] : [];
	for (const region of regions) {
		if (onset && region.from < onset.to) continue;
		found.push(
			spike(common, region) ?? otherSource(common, band, region) ?? missedPeak(common, peaks, region) ?? motion(common, region)
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
	if (region.from > 8 && otherSource(common, band, region)) return null;
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

/** Half rate, double rate or cadence lock: what the device would show with that source, against what it shows. */
function otherSource(common: CommonSeconds, band: CadenceBand | null, region: Region): Found | null {
	const lengthS = region.to - region.from;
	if (lengthS < SOURCE_SHORTEST_S) return null;
	const [best] = explanations(common, band, region);
	if (!best || best.share < SOURCE_SHARE || best.source === 'flattened') return null;
	const level = whole(medianOf(common.wearable.subarray(region.from, region.to)));
	const heart = whole(medianOf(common.expected.subarray(region.from, region.to)));
	const score = asScore(0.1 + 0.6 * best.share + 0.3 * rising(lengthS, SOURCE_SHORTEST_S, 25));
	if (best.source === 'half' || best.source === 'double') {
		const word = best.source === 'half' ? 'half' : 'twice';
		return { ...region, kind: `${best.source}-rate`, score, evidence: `Reads ${word} of the reference for ${duration(lengthS)}: ${level} where the reference shows ${heart}.` };
	}
	if (lengthS < LOCK_SHORTEST_S || !band) return null;
	const multiple = best.source === 'cadence' ? 1 : best.source === 'twice cadence' ? 2 : 0.5;
	const of = multiple === 1 ? 'cadence' : multiple === 2 ? 'twice the cadence' : 'half of the cadence';
	return {
		...region,
		kind: 'cadence-lock',
		score,
		evidence: `Stays within ${whole(Math.max(2, best.misfitBpm))} bpm of ${of} (${whole(multiple * medianOf(band.low.subarray(region.from, region.to)))} a minute) for most of ${duration(lengthS)} while the reference ${course(common.expected[region.from], common.expected[region.to - 1])}.`
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
