/** Agreement of two annotators beyond chance: Cohen's kappa on labels second by second. */
import { normalQuantile } from './distributions';
import { notDeterminable, type Figure, type Interval } from './determinable';
import { InvalidInput } from './invalid';

export interface Kappa {
	kappa: Figure;
	/** Of independent labels; seconds are not, so over a session it is too narrow and only bounds the answer. */
	ci95: Interval;
	/** Share of labels on which both agree, 0 to 1. */
	observed: Figure;
	/** Share on which they would agree by chance. */
	expected: Figure;
}

/**
 * Cohen's kappa from a table of counts or proportions, rows the first annotator, columns the second.
 *
 * The interval uses the large-sample variance of Fleiss JL, Cohen J, Everitt BS (1969) Psychol Bull 72:323-327.
 *
 * @param table square, no negative cells
 * @param n number of labels where the table holds proportions; default the sum of the table
 * @throws InvalidInput when the table is not square or holds a negative number
 * @see Cohen J (1960) Educ Psychol Meas 20:37-46
 */
export function cohenKappa(table: readonly (readonly number[])[], n?: number): Kappa {
	const k = table.length;
	if (table.some((row) => row.length !== k || row.some((cell) => !(cell >= 0))))
		throw new InvalidInput('not-a-table', 'Kappa needs a square table without negative numbers.');
	const total = table.reduce((sum, row) => sum + row.reduce((a, b) => a + b, 0), 0);
	if (!(total > 0)) {
		const reason = notDeterminable('There are no labels.');
		return { kappa: reason, ci95: reason, observed: reason, expected: reason };
	}
	const p = table.map((row) => row.map((cell) => cell / total));
	const rows = p.map((row) => row.reduce((a, b) => a + b, 0));
	const columns = p.map((_, j) => p.reduce((sum, row) => sum + row[j], 0));
	let observed = 0;
	let expected = 0;
	for (let i = 0; i < k; i++) {
		observed += p[i][i];
		expected += rows[i] * columns[i];
	}
	if (!(expected < 1)) {
		const reason = notDeterminable('Both used one label only: there is no chance agreement to correct for.');
		return { kappa: reason, ci95: reason, observed, expected };
	}
	const kappa = (observed - expected) / (1 - expected);
	let diagonal = 0;
	let off = 0;
	for (let i = 0; i < k; i++) {
		diagonal += p[i][i] * (1 - (rows[i] + columns[i]) * (1 - kappa)) ** 2;
		for (let j = 0; j < k; j++) if (i !== j) off += p[i][j] * (columns[i] + rows[j]) ** 2;
	}
	const count = n ?? total;
	const variance =
		(diagonal + (1 - kappa) ** 2 * off - (kappa - expected * (1 - kappa)) ** 2) / (count * (1 - expected) ** 2);
	const reach = normalQuantile(0.975) * Math.sqrt(Math.max(0, variance));
	return {
		kappa,
		ci95: count > 1 ? [kappa - reach, kappa + reach] : notDeterminable('The number of labels is not known.'),
		observed,
		expected
	};
}

/** Table of labels that two annotators gave to the same seconds; labels 0 to `kinds` − 1. */
export function labelTable(first: ArrayLike<number>, second: ArrayLike<number>, kinds: number): number[][] {
	const table = Array.from({ length: kinds }, () => new Array<number>(kinds).fill(0));
	for (let i = 0; i < Math.min(first.length, second.length); i++) table[first[i]][second[i]]++;
	return table;
}
