/** What a detector hands to the analyst: a stretch, a kind, how sure it is, and why, in one sentence. */

/** Kinds that detectors propose, by the keys of the tag kinds. */
export const PROPOSED_KINDS = ['rest', 'dropout', 'hold', 'half-rate', 'double-rate', 'cadence-lock', 'motion-artefact', 'spike', 'missed-peak', 'onset-delay', 'reference-fault'] as const;
export type ProposedKind = (typeof PROPOSED_KINDS)[number];

export interface Proposal {
	kind: ProposedKind;
	/** The recording that the proposal stands on. */
	on: 'reference' | 'wearable';
	/** Epoch s on that recording's own clock. */
	startS: number;
	endS: number;
	/** 0 to 1, higher is surer; an order within a kind, not a probability. */
	score: number;
	evidence: string;
}

/**
 * Where the wearable's clock stands:
 * t_reference = t_wearable + offsetS + driftPpm · 10⁻⁶ · (t_wearable − first reading of the wearable's heart rate).
 */
export interface ClockMapping {
	offsetS: number;
	driftPpm: number;
}

/** A score that is 0 at `none` and nears 1 as the value grows; half of it at `none + half`. */
export function rising(value: number, none: number, half: number): number {
	const beyond = Math.max(0, value - none);
	return beyond / (beyond + half);
}

/** A score is a number with two decimals within 0 to 1. */
export const asScore = (value: number): number => Math.round(Math.min(1, Math.max(0, value)) * 100) / 100;
