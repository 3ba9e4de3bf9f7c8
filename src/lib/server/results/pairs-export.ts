/**
 * Cleaned aligned pairs as CSV with their provenance, and the data dictionary that goes with them.
 * Values are written as they are paired, so that whoever computes from the file gets the page's figures.
 */
import { kindsInMask } from '../../agreement/pair-table';
import { csvCell } from '../../text/csv';
import { invalid } from '../errors';
import type { WearablePairs } from './session-pairs';
import type { StudyBasis } from './load-sessions';

export const EXPORT_ANALYSES = ['all', 'primary', 'cleaned'] as const;
export type ExportAnalysis = (typeof EXPORT_ANALYSES)[number];

interface Column {
	name: string;
	unit: string;
	meaning: string;
}

export const PAIR_COLUMNS: readonly Column[] = [
	{ name: 'session', unit: '', meaning: 'Code of the session within the study' },
	{ name: 'participant', unit: '', meaning: 'Pseudonym code of the wearer; empty where it was not said' },
	{ name: 'activity', unit: '', meaning: 'Activity of the session; empty where it was not said' },
	{ name: 'device', unit: '', meaning: 'Model of the wearable under test' },
	{ name: 'firmware', unit: '', meaning: 'Software version of the wearable' },
	{ name: 'state', unit: '', meaning: 'How far the session has come: only "reviewed" has had a second look' },
	{ name: 'time', unit: 'ISO 8601, UTC', meaning: "Time of the pair on the reference's clock; the start of the epoch on grids above 1 s" },
	{ name: 'reference', unit: 'bpm', meaning: 'Heart rate of the reference' },
	{ name: 'wearable', unit: 'bpm', meaning: 'Heart rate of the wearable at the same time, after alignment' },
	{ name: 'offset_s', unit: 's', meaning: "Seconds added to the wearable's time stamps to put them on the reference's clock" },
	{ name: 'drift_ppm', unit: '1e-6', meaning: "How much faster the reference's clock runs, counted from the wearable's first reading" },
	{ name: 'offset_from', unit: '', meaning: 'Where the offset comes from: proposed (by the search, reliable), peak, candidate, hand' },
	{ name: 'reference_tags', unit: '', meaning: "Accepted tags on the reference's recording at this time, separated by a space" },
	{ name: 'wearable_tags', unit: '', meaning: "Accepted tags on the wearable's recording at this time, separated by a space" },
	{ name: 'in_primary', unit: '0 or 1', meaning: 'Counted in the primary analysis: everything except reference faults' },
	{ name: 'in_cleaned', unit: '0 or 1', meaning: "Counted in the cleaned analysis: further exclusions by the study's plan" }
];

/** The dictionary as CSV: column, unit, meaning; then the tag kinds and the plan that the file rests on. */
export function pairsDictionary(basis: StudyBasis, study: { title: string; slug: string }): string {
	const rows: string[][] = [['entry', 'name', 'unit', 'meaning']];
	for (const c of PAIR_COLUMNS) rows.push(['column', c.name, c.unit, c.meaning]);
	for (const k of basis.kinds) rows.push(['tag', k.key, '', `${k.name}. ${k.meaning}`]);
	const { plan } = basis;
	rows.push(['study', study.slug, '', study.title]);
	rows.push(['plan', 'version', '', String(basis.planVersion)]);
	rows.push(['plan', 'grid', 's', String(plan.gridS)]);
	rows.push(['plan', 'pairing', 's', plan.pairing.method === 'interpolate' ? `straight line across at most ${plan.pairing.maxGapS}` : `nearest reading within ${plan.pairing.toleranceS}`]);
	rows.push(['note', 'difference', 'bpm', 'wearable minus reference']);
	rows.push(['note', 'missing', '', 'A second at which either side has no value is no pair and has no row; coverage is given with the figures']);
	rows.push(['note', 'use', '', 'Not for diagnosis or for guiding treatment: nothing here is a medical device']);
	return rows.map((r) => r.map(csvCell).join(',')).join('\r\n') + '\r\n';
}

const words = (mask: number, keys: string[]) => (mask === 0 ? '' : kindsInMask(mask, keys).join(' '));

/** Rows of the export in pieces of one wearable's session, header first, so that a large study streams. */
export function* pairsCsv(all: Iterable<WearablePairs>, analysis: ExportAnalysis): Generator<string> {
	yield PAIR_COLUMNS.map((c) => c.name).join(',') + '\r\n';
	for (const { session, track, table } of all) {
		const before = [session.code, session.participantCode ?? '', session.activity ?? '', track.name, track.firmware, session.state].map(csvCell).join(',');
		const after = [track.alignment?.offsetS ?? 0, track.alignment?.driftPpm ?? 0, track.alignment?.method ?? ''].join(',');
		const lines: string[] = [];
		for (let i = 0; i < table.n; i++) {
			if (analysis === 'primary' && !table.inPrimary[i]) continue;
			if (analysis === 'cleaned' && !table.inCleaned[i]) continue;
			lines.push(
				`${before},${new Date(table.tS[i] * 1000).toISOString()},${table.reference[i]},${table.wearable[i]},${after},` +
					`${words(table.referenceTags[i], table.kindKeys)},${words(table.wearableTags[i], table.kindKeys)},${table.inPrimary[i]},${table.inCleaned[i]}\r\n`
			);
		}
		if (lines.length > 0) yield lines.join('');
	}
}

/** The analysis that a request asks for; all pairs with their flags when it does not say. */
export function analysisFrom(value: string | null): ExportAnalysis {
	if (value === null || value === '') return 'all';
	const found = EXPORT_ANALYSES.find((a) => a === value);
	if (!found) throw invalid(`"${value}" is no analysis. Use analysis=all, analysis=primary or analysis=cleaned.`);
	return found;
}
