/** What pairing gives: pairs in columns, which analysis each counts in, and where the time went. */

/** Time left out by one kind, in seconds of pairs; one second under two kinds counts for both. */
export interface KindTime {
	kind: string;
	/** Seconds of the reference's span under the kind, on either recording, with or without a value. */
	taggedS: number;
	/** Seconds of pairs that the kind takes out of the analysis. */
	primaryOutS: number;
	cleanedOutS: number;
}

/** How much time there was and where it went, counted on whole seconds whatever the plan's grid is. */
export interface PairCounts {
	/** Seconds at which the reference has a value. */
	referenceS: number;
	/** Those of them without a reference fault: the whole that coverage is a share of. */
	soundReferenceS: number;
	/** Sound seconds at which the wearable has a value: the primary analysis. */
	pairedS: number;
	/** Those that stay in the cleaned analysis. */
	cleanedS: number;
	/** Seconds with two values that leave the primary analysis, and that leave the cleaned one. Each second once. */
	primaryOutS: number;
	cleanedOutS: number;
	/** Kinds that occur, in the order of the kinds. */
	byKind: KindTime[];
}

/** Pairs in columns; row i of every column is one pair. */
export interface PairTable {
	n: number;
	/** Seconds that one pair stands for on the grid; null when pairs are the wearable's own readings. */
	gridS: number | null;
	/** Reference's clock, epoch seconds, strictly increasing; the start of the epoch on grids above 1 s. */
	tS: Float64Array;
	/** bpm. */
	reference: Float64Array;
	wearable: Float64Array;
	/** 1 = counted in the analysis. A pair in the cleaned analysis is always in the primary one. */
	inPrimary: Uint8Array;
	inCleaned: Uint8Array;
	/** Tags on the reference's and on the wearable's recording: bit i is `kindKeys[i]`. */
	referenceTags: Uint32Array;
	wearableTags: Uint32Array;
	kindKeys: string[];
	counts: PairCounts;
	/** Tags that had no effect and why, one sentence each. */
	notes: string[];
}

/** The columns alone; while pairing, rows may still lack a value (NaN). */
export type UncountedTable = Omit<PairTable, 'kindKeys' | 'counts' | 'notes' | 'gridS'>;
/** The columns of the pairs that count in one analysis, ready for the figures. */
export function pairsOf(
	table: PairTable,
	analysis: 'primary' | 'cleaned'
): { reference: Float64Array; wearable: Float64Array } {
	const counts = analysis === 'primary' ? table.inPrimary : table.inCleaned;
	let n = 0;
	for (let i = 0; i < table.n; i++) n += counts[i];
	const reference = new Float64Array(n);
	const wearable = new Float64Array(n);
	for (let i = 0, k = 0; i < table.n; i++) {
		if (!counts[i]) continue;
		reference[k] = table.reference[i];
		wearable[k++] = table.wearable[i];
	}
	return { reference, wearable };
}

/** Keys of the kinds in a tag mask, in the order of the kinds. */
export function kindsInMask(mask: number, kindKeys: readonly string[]): string[] {
	return kindKeys.filter((_, i) => (mask >>> i) & 1);
}

/** Share of the reference's sound time with a wearable value, 0 to 1; null when there is no sound time. */
export function coverageOf(counts: Pick<PairCounts, 'soundReferenceS' | 'pairedS'>): number | null {
	return counts.soundReferenceS > 0 ? counts.pairedS / counts.soundReferenceS : null;
}
