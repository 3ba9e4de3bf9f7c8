/**
 * From two traces and their tags to pairs: the one definition of what a pair is.
 *
 * **Clocks.** Everything that leaves this module stands on the reference's clock. The reference's trace and tags are
 * on it already. The wearable's trace and tags are on the wearable's own clock and are moved by
 *
 *     t_reference = t_wearable + offsetS + driftPpm · 10⁻⁶ · (t_wearable − wearableFirstS)
 *
 *     wearable's clock   |--a----b------c---|
 *     offsetS = +3.4         ↘    ↘      ↘
 *     reference's clock  0--------a----b------c---|     a tag [b, c) moves with its samples
 *
 * **Pairs** stand on a grid of whole seconds of the reference's clock between its first and last reading. Each side's
 * value comes from its own readings by the plan's rule; nothing is extrapolated. A second where one side has no value
 * is no pair; it still counts in the coverage.
 *
 * **Tags.** A pair is under a tag when its time is, or when a reading that its value is made of is: the far end of an
 * interpolation cannot carry a tagged reading into an analysis.
 */
import type { Trace } from '../formats/recording';
import { epochPairs } from './epochs';
import { InvalidInput } from './invalid';
import type { KindTime, PairCounts, PairTable, UncountedTable } from './pair-table';
import { treatmentOf, type AnalysisPlan } from './plan';
import { sampleTrace, TIME_TOLERANCE_S, type Sampled } from './sampling';
import type { PairingTag, TagKind } from './tag';
import { sideBlamed } from './tag-kinds';

export { coverageOf, kindsInMask, pairsOf, type KindTime, type PairCounts, type PairTable } from './pair-table';

export interface PairingInput {
	/** Heart rate on the reference's clock. */
	reference: Trace;
	/** Heart rate on the wearable's own clock. */
	wearable: Trace;
	/** Seconds to add to the wearable's stamps. */
	offsetS: number;
	/** How much faster the reference's clock runs, millionths. */
	driftPpm: number;
	/** Where drift counts from, on the wearable's clock; default: the trace's first reading. */
	wearableFirstS?: number;
	/** Accepted tags, on their recording's own clock. */
	referenceTags: readonly PairingTag[];
	wearableTags: readonly PairingTag[];
	plan: Pick<AnalysisPlan, 'gridS' | 'pairing' | 'holdLimitS' | 'treatments'>;
	/** At most 32. */
	kinds: readonly TagKind[];
}

/** What the tags of one recording say at each time of a column: kinds, and kinds that take the time out. */
interface TagColumns {
	kinds: Uint32Array;
	primaryOut: Uint32Array;
	cleanedOut: Uint32Array;
}

/**
 * Pair a wearable's heart rate with the reference's.
 *
 * Primary: every second at which both have a value, unless a reference fault stands there. Cleaned: of those, the ones
 * that no tag takes out by the plan, by its kind, or by its own override; of several tags, one that says out is enough.
 * An override cannot bring a reference fault back. On grids above 1 s a pair is the mean over the epoch's seconds that
 * count in the primary analysis, at least half of the epoch; it leaves the cleaned analysis when any of these seconds
 * does. With `per-sample`, pairs are the wearable's own readings and the reference's value at their times.
 *
 * @returns the table; empty when the traces do not overlap
 * @throws InvalidInput when offset or drift are no numbers, a tag names an unknown kind or ends before it starts, or
 *   there are more than 32 kinds
 */
export function pairTraces(input: PairingInput): PairTable {
	const { reference, wearable, plan, kinds } = input;
	checkInput(input);
	const drift = input.driftPpm * 1e-6;
	const firstS = input.wearableFirstS ?? wearable.tS[0] ?? 0;
	const toReference = (tS: number) => tS + input.offsetS + drift * (tS - firstS);
	const wearableS = wearable.tS.map(toReference);

	const lanes = {
		reference: {
			tS: reference.tS,
			tags: input.referenceTags.map((tag) => judgeTag(tag, 'reference', input)),
			columns: emptyColumns(reference.tS.length)
		},
		wearable: {
			tS: wearableS,
			tags: input.wearableTags.map((tag) =>
				judgeTag({ ...tag, startS: toReference(tag.startS), endS: toReference(tag.endS) }, 'wearable', input)
			),
			columns: emptyColumns(wearableS.length)
		}
	};
	for (const lane of Object.values(lanes)) for (const tag of lane.tags) markColumns(lane.columns, lane.tS, tag);

	const tableAt = (queryS: Float64Array, wearableAt: Sampled): { table: UncountedTable; out: OutColumns } => {
		const referenceAt = sampleTrace(reference.tS, reference.value, queryS, plan.pairing, 0);
		return joinSides(
			queryS,
			{ at: referenceAt, tags: lanes.reference.tags, columns: lanes.reference.columns },
			{ at: wearableAt, tags: lanes.wearable.tags, columns: lanes.wearable.columns }
		);
	};

	const seconds = wholeSeconds(reference.tS);
	const { table: perSecond, out } = tableAt(
		seconds,
		sampleTrace(wearableS, wearable.value, seconds, plan.pairing, plan.holdLimitS)
	);
	const counts = countTime(perSecond, out, kinds);
	const shared = {
		kindKeys: kinds.map((k) => k.key),
		counts,
		notes: [...new Set(Object.values(lanes).flatMap((lane) => lane.tags.flatMap((t) => t.note ?? [])))]
	};

	if (plan.gridS === 'per-sample') {
		const own = ownTimes(wearableS, wearable.value, reference.tS);
		return { gridS: null, ...onlyPairs(tableAt(own.queryS, own.sampled).table), ...shared };
	}
	if (plan.gridS === 1) return { gridS: 1, ...onlyPairs(perSecond), ...shared };
	return { gridS: plan.gridS, ...epochPairs(onlyPairs(perSecond), plan.gridS), ...shared };
}

function checkInput({ offsetS, driftPpm, kinds }: PairingInput): void {
	if (!Number.isFinite(offsetS))
		throw new InvalidInput('offset-not-a-number', 'The offset must be a number of seconds.');
	if (!Number.isFinite(driftPpm) || Math.abs(driftPpm) >= 1e6)
		throw new InvalidInput(
			'drift-out-of-range',
			'The drift must be a number of millionths between −1 000 000 and 1 000 000.'
		);
	if (kinds.length > 32)
		throw new InvalidInput(
			'too-many-kinds',
			`There are ${kinds.length} tag kinds; pairing can tell 32 apart. Retire kinds that are not used.`
		);
}

interface JudgedTag {
	/** On the reference's clock. */
	startS: number;
	endS: number;
	bit: number;
	primaryOut: boolean;
	cleanedOut: boolean;
	note: string | null;
}

function judgeTag(tag: PairingTag, recordingRole: 'reference' | 'wearable', { plan, kinds }: PairingInput): JudgedTag {
	const index = kinds.findIndex((k) => k.key === tag.kind);
	if (index < 0)
		throw new InvalidInput('unknown-kind', `A tag is of kind "${tag.kind}", which this team does not have.`);
	if (!(tag.endS > tag.startS))
		throw new InvalidInput('empty-tag', `A tag of kind "${tag.kind}" must end after it starts.`);
	const kind = kinds[index];
	const blamed = sideBlamed(kind, recordingRole);
	const treatment = treatmentOf(plan, kind);
	// A plan may keep a reference-blaming kind in; any other fault on the reference's own recording always leaves.
	const primaryOut = blamed === 'reference' && (kind.blames !== 'reference' || treatment.primary === 'out');
	const misplaced = kind.blames === 'reference' && recordingRole === 'wearable';
	const cleanedOut = primaryOut || (!misplaced && (tag.cleanedOverride ?? treatment.cleaned) === 'out');
	return {
		startS: tag.startS,
		endS: tag.endS,
		bit: 2 ** index,
		primaryOut,
		cleanedOut,
		note: misplaced
			? `"${kind.name}" stands on a wearable's recording and takes nothing out. Put it on the reference.`
			: null
	};
}

const emptyColumns = (n: number): TagColumns => ({
	kinds: new Uint32Array(n),
	primaryOut: new Uint32Array(n),
	cleanedOut: new Uint32Array(n)
});

/** First index whose time is at or after `tS`, within the tolerance. */
function firstAtOrAfter(times: Float64Array, tS: number): number {
	let low = 0;
	let high = times.length;
	while (low < high) {
		const middle = (low + high) >>> 1;
		if (times[middle] < tS - TIME_TOLERANCE_S) low = middle + 1;
		else high = middle;
	}
	return low;
}

function markColumns(columns: TagColumns, times: Float64Array, tag: JudgedTag): void {
	const end = firstAtOrAfter(times, tag.endS);
	for (let i = firstAtOrAfter(times, tag.startS); i < end; i++) {
		columns.kinds[i] |= tag.bit;
		if (tag.primaryOut) columns.primaryOut[i] |= tag.bit;
		if (tag.cleanedOut) columns.cleanedOut[i] |= tag.bit;
	}
}

function wholeSeconds(tS: Float64Array): Float64Array {
	if (!tS.length) return new Float64Array(0);
	const first = Math.ceil(tS[0] - TIME_TOLERANCE_S);
	const last = Math.floor(tS[tS.length - 1] + TIME_TOLERANCE_S);
	return Float64Array.from({ length: Math.max(0, last - first + 1) }, (_, i) => first + i);
}

/** The wearable's own readings within the reference's span, as query times that they answer themselves. */
function ownTimes(
	wearableS: Float64Array,
	value: Float64Array,
	referenceS: Float64Array
): { queryS: Float64Array; sampled: Sampled } {
	const from = referenceS.length ? firstAtOrAfter(wearableS, referenceS[0]) : 0;
	const to = referenceS.length
		? firstAtOrAfter(wearableS, referenceS[referenceS.length - 1] + 2 * TIME_TOLERANCE_S)
		: 0;
	const index = Int32Array.from({ length: Math.max(0, to - from) }, (_, i) => from + i);
	return { queryS: wearableS.slice(from, to), sampled: { value: value.slice(from, to), low: index, high: index } };
}

interface OutColumns {
	primaryOut: Uint32Array;
	cleanedOut: Uint32Array;
}
interface Side {
	at: Sampled;
	tags: JudgedTag[];
	columns: TagColumns;
}

function joinSides(queryS: Float64Array, reference: Side, wearable: Side): { table: UncountedTable; out: OutColumns } {
	const n = queryS.length;
	const [referenceTags, wearableTags] = [reference, wearable].map(({ at, tags, columns }) => {
		const here = emptyColumns(n);
		for (const tag of tags) markColumns(here, queryS, tag);
		for (let i = 0; i < n; i++) {
			if (at.low[i] < 0) continue;
			here.kinds[i] |= columns.kinds[at.low[i]] | columns.kinds[at.high[i]];
			here.primaryOut[i] |= columns.primaryOut[at.low[i]] | columns.primaryOut[at.high[i]];
			here.cleanedOut[i] |= columns.cleanedOut[at.low[i]] | columns.cleanedOut[at.high[i]];
		}
		return here;
	});
	const primaryOut = referenceTags.primaryOut.map((mask, i) => mask | wearableTags.primaryOut[i]);
	const cleanedOut = referenceTags.cleanedOut.map((mask, i) => mask | wearableTags.cleanedOut[i]);
	const table: UncountedTable = {
		n,
		tS: queryS,
		reference: reference.at.value,
		wearable: wearable.at.value,
		inPrimary: new Uint8Array(n),
		inCleaned: new Uint8Array(n),
		referenceTags: referenceTags.kinds,
		wearableTags: wearableTags.kinds
	};
	for (let i = 0; i < n; i++) {
		const paired = !Number.isNaN(table.reference[i]) && !Number.isNaN(table.wearable[i]);
		table.inPrimary[i] = paired && !primaryOut[i] ? 1 : 0;
		table.inCleaned[i] = paired && !primaryOut[i] && !cleanedOut[i] ? 1 : 0;
	}
	return { table, out: { primaryOut, cleanedOut } };
}

function countTime(table: UncountedTable, out: OutColumns, kinds: readonly TagKind[]): PairCounts {
	const counts: PairCounts = {
		referenceS: 0,
		soundReferenceS: 0,
		pairedS: 0,
		cleanedS: 0,
		primaryOutS: 0,
		cleanedOutS: 0,
		byKind: []
	};
	const byKind = kinds.map((kind): KindTime => ({ kind: kind.key, taggedS: 0, primaryOutS: 0, cleanedOutS: 0 }));
	for (let i = 0; i < table.n; i++) {
		const hasReference = !Number.isNaN(table.reference[i]);
		const paired = hasReference && !Number.isNaN(table.wearable[i]);
		if (hasReference) counts.referenceS++;
		if (hasReference && !out.primaryOut[i]) counts.soundReferenceS++;
		counts.pairedS += table.inPrimary[i];
		counts.cleanedS += table.inCleaned[i];
		if (paired && !table.inPrimary[i]) counts.primaryOutS++;
		if (paired && !table.inCleaned[i]) counts.cleanedOutS++;
		const tagged = table.referenceTags[i] | table.wearableTags[i];
		if (!tagged) continue;
		for (let k = 0; k < byKind.length; k++) {
			if (!((tagged >>> k) & 1)) continue;
			byKind[k].taggedS++;
			if (paired && (out.primaryOut[i] >>> k) & 1) byKind[k].primaryOutS++;
			if (paired && (out.cleanedOut[i] >>> k) & 1) byKind[k].cleanedOutS++;
		}
	}
	counts.byKind = byKind.filter((time) => time.taggedS > 0);
	return counts;
}

/** Drop the rows where one side has no value. */
function onlyPairs(table: UncountedTable): UncountedTable {
	const kept: number[] = [];
	for (let i = 0; i < table.n; i++)
		if (!Number.isNaN(table.reference[i]) && !Number.isNaN(table.wearable[i])) kept.push(i);
	const rows = Int32Array.from(kept);
	const floats = (column: Float64Array) => Float64Array.from(rows, (i) => column[i]);
	return {
		n: rows.length,
		tS: floats(table.tS),
		reference: floats(table.reference),
		wearable: floats(table.wearable),
		inPrimary: Uint8Array.from(rows, (i) => table.inPrimary[i]),
		inCleaned: Uint8Array.from(rows, (i) => table.inCleaned[i]),
		referenceTags: Uint32Array.from(rows, (i) => table.referenceTags[i]),
		wearableTags: Uint32Array.from(rows, (i) => table.wearableTags[i])
	};
}
