/**
 * The analysis plan: every choice that decides what a pair is and which pairs count, written down before anyone looks
 * at results. A study keeps its plans in versions; figures name the version they were made with.
 */
import { DEFAULT_TAG_KINDS } from './tag-kinds';
import type { TagKind, TagTreatment } from './tag';

export const GRIDS_S = [1, 5, 10, 15, 30, 60] as const;
/** Epoch in seconds on the reference's clock, or one pair for each of the wearable's own readings. */
export type GridS = (typeof GRIDS_S)[number] | 'per-sample';

export type PairingRule =
	/** Straight line between two readings that are at most `maxGapS` apart. */
	| { method: 'interpolate'; maxGapS: number }
	/** The reading nearest in time, at most `toleranceS` away. */
	| { method: 'nearest'; toleranceS: number };

export interface Treatment {
	primary: TagTreatment;
	cleaned: TagTreatment;
}

export interface AnalysisPlan {
	/** Version of the plan within its study, from 1. */
	version: number;
	gridS: GridS;
	pairing: PairingRule;
	/**
	 * How long a wearable's reading stands after its stamp where the next one is too far for pairing, s. For devices
	 * that write only when the value changes; 0 = a reading never stands past its gap. The reference is never held.
	 */
	holdLimitS: number;
	/** `clock`: by the clock offset, a late response counts. `best-fit`: by the best-fit shift, it is forgiven. */
	alignment: 'clock' | 'best-fit';
	/** By kind key; a kind that is absent here is treated as the kind itself says. */
	treatments: Record<string, Treatment>;
	/** Fewer sessions or participants than this: no verdict in words. */
	minSessions: number;
	minParticipants: number;
	/** Smallest difference between two devices that matters, bpm. */
	smallestDifferenceBpm: number;
	/** The mean difference counts as equivalent inside ± this, bpm. */
	equivalenceMarginBpm: number;
	/** Coverage below this is named beside every figure, %. */
	minCoveragePct: number;
	/** Resamples and seed of the cluster bootstrap, so that intervals can be reproduced. */
	resamples: number;
	seed: number;
	/** Who tags does not see which way it moves the figures. */
	hideFiguresWhileTagging: boolean;
	/** Share of sessions that a second person tags blind, %. */
	secondAnnotationPct: number;
}

/** Defaults of a new study. Common practice, no source, except where a test names one. */
export const DEFAULT_PLAN: AnalysisPlan = {
	version: 1,
	gridS: 1,
	pairing: { method: 'interpolate', maxGapS: 5 },
	holdLimitS: 0,
	// Heart rate alone gives the best-fit shift; a plan asks for the clock where both sides record movement.
	alignment: 'best-fit',
	treatments: {},
	minSessions: 6,
	minParticipants: 3,
	smallestDifferenceBpm: 1,
	equivalenceMarginBpm: 5,
	minCoveragePct: 80,
	resamples: 10_000,
	seed: 1,
	hideFiguresWhileTagging: false,
	secondAnnotationPct: 10
};

export interface PlanProblem {
	/** Where in the plan: `pairing.maxGapS`, `treatments.cadence-lock.primary`. */
	path: string;
	/** What is wrong and what is allowed, one sentence. */
	message: string;
}

export type PlanValidation = { ok: true; plan: AnalysisPlan } | { ok: false; problems: PlanProblem[] };

const isRecord = (value: unknown): value is Record<string, unknown> =>
	typeof value === 'object' && value !== null && !Array.isArray(value);

/**
 * Check a plan that came from outside (a form, a file, a stored body) and fill in what it leaves out.
 *
 * @param input anything; fields left out take the value of `DEFAULT_PLAN`, unknown fields are a problem
 * @param kinds the team's tag kinds; a treatment may name only these
 * @returns the whole plan, or every problem found. A plan that takes anything but reference faults out of the primary
 *   analysis is a problem: the wearable's own faults count.
 */
export function validatePlan(input: unknown, kinds: readonly TagKind[] = DEFAULT_TAG_KINDS): PlanValidation {
	if (!isRecord(input))
		return { ok: false, problems: [{ path: '', message: 'The plan must be an object with named fields.' }] };
	const problems: PlanProblem[] = [];
	const known = new Set(Object.keys(DEFAULT_PLAN));
	for (const key of Object.keys(input)) {
		if (!known.has(key))
			problems.push({ path: key, message: `The plan has no field "${key}". Known fields: ${[...known].join(', ')}.` });
	}

	const number = (key: NumberField, min: number, max: number, whole: boolean): number => {
		const value = input[key] ?? DEFAULT_PLAN[key];
		if (
			typeof value !== 'number' ||
			!Number.isFinite(value) ||
			value < min ||
			value > max ||
			(whole && !Number.isInteger(value))
		) {
			problems.push({ path: key, message: `${key} must be a ${whole ? 'whole ' : ''}number from ${min} to ${max}.` });
			return DEFAULT_PLAN[key];
		}
		return value;
	};

	const hideFigures = input.hideFiguresWhileTagging ?? DEFAULT_PLAN.hideFiguresWhileTagging;
	if (typeof hideFigures !== 'boolean')
		problems.push({ path: 'hideFiguresWhileTagging', message: 'hideFiguresWhileTagging must be true or false.' });
	const alignment = input.alignment ?? DEFAULT_PLAN.alignment;
	if (alignment !== 'clock' && alignment !== 'best-fit')
		problems.push({ path: 'alignment', message: 'alignment must be "clock" or "best-fit".' });

	const plan: AnalysisPlan = {
		version: number('version', 1, 1_000_000, true),
		gridS: gridFrom(input.gridS ?? DEFAULT_PLAN.gridS, problems),
		pairing: pairingFrom(input.pairing ?? DEFAULT_PLAN.pairing, problems),
		holdLimitS: number('holdLimitS', 0, 600, false),
		alignment: alignment === 'best-fit' ? 'best-fit' : 'clock',
		treatments: treatmentsFrom(input.treatments ?? {}, kinds, problems),
		minSessions: number('minSessions', 2, 10_000, true),
		minParticipants: number('minParticipants', 1, 10_000, true),
		smallestDifferenceBpm: number('smallestDifferenceBpm', 0, 100, false),
		equivalenceMarginBpm: number('equivalenceMarginBpm', 0.01, 100, false),
		minCoveragePct: number('minCoveragePct', 0, 100, false),
		resamples: number('resamples', 200, 1_000_000, true),
		seed: number('seed', 0, 4_294_967_295, true),
		hideFiguresWhileTagging: hideFigures === true,
		secondAnnotationPct: number('secondAnnotationPct', 0, 100, false)
	};
	return problems.length ? { ok: false, problems } : { ok: true, plan };
}

/** What the plan does with a kind: its own rule, else the kind's. */
export function treatmentOf(plan: Pick<AnalysisPlan, 'treatments'>, kind: TagKind): Treatment {
	return Object.hasOwn(plan.treatments, kind.key)
		? plan.treatments[kind.key]
		: { primary: kind.primary, cleaned: kind.cleaned };
}

type NumberField = { [K in keyof AnalysisPlan]: AnalysisPlan[K] extends number ? K : never }[keyof AnalysisPlan];

function gridFrom(value: unknown, problems: PlanProblem[]): GridS {
	const grid = GRIDS_S.find((g) => g === value);
	if (grid !== undefined) return grid;
	if (value !== 'per-sample')
		problems.push({ path: 'gridS', message: `gridS must be "per-sample" or one of ${GRIDS_S.join(', ')} (seconds).` });
	return 'per-sample';
}

function pairingFrom(value: unknown, problems: PlanProblem[]): PairingRule {
	const seconds = (field: unknown): field is number =>
		typeof field === 'number' && Number.isFinite(field) && field >= 0 && field <= 600;
	if (isRecord(value)) {
		const extra = Object.keys(value).filter(
			(key) => key !== 'method' && key !== (value.method === 'nearest' ? 'toleranceS' : 'maxGapS')
		);
		if (extra.length)
			problems.push({
				path: `pairing.${extra[0]}`,
				message: `pairing by "${String(value.method)}" has no field "${extra[0]}".`
			});
		if (value.method === 'interpolate') {
			if (seconds(value.maxGapS)) return { method: 'interpolate', maxGapS: value.maxGapS };
			problems.push({ path: 'pairing.maxGapS', message: 'pairing.maxGapS must be a number from 0 to 600 (seconds).' });
			return DEFAULT_PLAN.pairing;
		}
		if (value.method === 'nearest') {
			if (seconds(value.toleranceS)) return { method: 'nearest', toleranceS: value.toleranceS };
			problems.push({
				path: 'pairing.toleranceS',
				message: 'pairing.toleranceS must be a number from 0 to 600 (seconds).'
			});
			return DEFAULT_PLAN.pairing;
		}
	}
	problems.push({
		path: 'pairing',
		message:
			'pairing must be {"method": "interpolate", "maxGapS": seconds} or {"method": "nearest", "toleranceS": seconds}.'
	});
	return DEFAULT_PLAN.pairing;
}

function treatmentsFrom(value: unknown, kinds: readonly TagKind[], problems: PlanProblem[]): Record<string, Treatment> {
	const treatments: Record<string, Treatment> = {};
	if (!isRecord(value)) {
		problems.push({ path: 'treatments', message: 'treatments must be an object: kind key to {"primary", "cleaned"}.' });
		return treatments;
	}
	for (const [key, given] of Object.entries(value)) {
		const path = `treatments.${key}`;
		const kind = kinds.find((k) => k.key === key);
		if (!kind) {
			problems.push({
				path,
				message: `There is no tag kind "${key}". Known kinds: ${kinds.map((k) => k.key).join(', ')}.`
			});
			continue;
		}
		const primary = isRecord(given) ? (given.primary ?? kind.primary) : undefined;
		const cleaned = isRecord(given) ? (given.cleaned ?? kind.cleaned) : undefined;
		if ((primary !== 'in' && primary !== 'out') || (cleaned !== 'in' && cleaned !== 'out')) {
			problems.push({
				path,
				message: `The treatment of "${key}" must be {"primary": "in" or "out", "cleaned": "in" or "out"}.`
			});
			continue;
		}
		if (primary === 'out' && kind.blames !== 'reference') {
			problems.push({
				path: `${path}.primary`,
				message: `"${kind.name}" is no fault of the reference and cannot leave the primary analysis. Take it out of the cleaned analysis instead.`
			});
			continue;
		}
		if (primary === 'out' && cleaned === 'in') {
			problems.push({
				path: `${path}.cleaned`,
				message: `"${kind.name}" leaves the primary analysis and therefore the cleaned one too: set cleaned to "out".`
			});
			continue;
		}
		treatments[key] = { primary, cleaned };
	}
	return treatments;
}
