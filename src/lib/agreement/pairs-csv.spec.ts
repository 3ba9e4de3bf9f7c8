import { describe, expect, it } from 'vitest';
import { readPairsCsv, type PairsCsvOptions } from './pairs-csv';

const read = (text: string, options?: PairsCsvOptions) => {
	const result = readPairsCsv(text, options);
	if (!result.ok) throw new Error(result.error.message);
	return result;
};
const values = (text: string, options?: PairsCsvOptions) =>
	read(text, options).groups.map((g) => [g.session, [...g.reference], [...g.wearable]]);
const refusal = (text: string, options?: PairsCsvOptions) => {
	const result = readPairsCsv(text, options);
	return result.ok ? null : result.error;
};

describe('tables as spreadsheets write them', () => {
	const want = [
		['S1', [100, 110.5], [101, 108]],
		['S2', [90], [92]]
	];
	it.each([
		['plain', 'session,reference,wearable\nS1,100,101\nS1,110.5,108\nS2,90,92\n'],
		['no last line end', 'session,reference,wearable\nS1,100,101\nS1,110.5,108\nS2,90,92'],
		[
			'other order, further columns, capitals',
			'note,Wearable,REFERENCE,Session\nx,101,100,S1\ny,108,110.5,S1\nz,92,90,S2\n'
		],
		['semicolons and decimal commas', 'session;reference;wearable\nS1;100;101\nS1;110,5;108\nS2;90,0;92\n'],
		['tabs', 'session\treference\twearable\nS1\t100\t101\nS1\t110,5\t108\nS2\t90\t92\n'],
		['CRLF and a byte order mark', '\ufeffsession,reference,wearable\r\nS1,100,101\r\nS1,110.5,108\r\nS2,90,92\r\n'],
		['old line ends', 'session,reference,wearable\rS1,100,101\rS1,110.5,108\rS2,90,92\r'],
		[
			'quoted cells, decimal comma in quotes',
			'"session","reference","wearable"\n"S1","100","101"\n"S1","110,5","108"\n"S2","90","92"\n'
		],
		[
			'empty lines, comments, spaces',
			'# made by hand\n\nsession, reference, wearable\n S1 , 100 , 101\nS1, 110.5, 108\n\nS2, 90, 92\n\n'
		],
		['exponents', 'session,reference,wearable\nS1,1e2,1.01e2\nS1,+110.5,108.\nS2,90,92\n']
	])('%s', (_, text) => expect(values(text)).toEqual(want));
	it('a quoted cell may hold the delimiter, quotes and a line end; lines keep their numbers after it', () => {
		const text = 'note,session,reference,wearable\n"a, ""b""\nc",S1,100,101\n,S1,x,1\n';
		expect(refusal(text)?.message).toContain('Line 4');
		expect(values(text.replace(',S1,x,1\n', ''))).toEqual([['S1', [100], [101]]]);
	});
	it('a long table is read whole', () => {
		const rows = Array.from({ length: 5000 }, (_, i) => `S${i % 3},${60 + (i % 100)},${61 + (i % 100)}`);
		expect(read(`session,reference,wearable\n${rows.join('\n')}`).groups.map((g) => g.reference.length)).toEqual([
			1667, 1667, 1666
		]);
	});
});

describe('what is missing', () => {
	it('a row without a value is no pair, is told, and counts in the coverage when only the wearable is silent', () => {
		const { groups, messages } = read(
			'session,reference,wearable\nS1,100,\nS1,,101\nS1,102,NA\n,103,104\nS1,105,106\n'
		);
		expect(groups.map((g) => [g.soundReferenceS, g.pairedS])).toEqual([[3, 1]]);
		expect(messages).toEqual([
			'2 rows without a wearable value are no pair, first at line 2.',
			'1 row without a reference value is no pair, first at line 3.',
			'1 row without a session is no pair, first at line 5.'
		]);
	});
	it('a 0 counts as written and is pointed at', () => {
		const { groups, messages } = read('session,reference,wearable\nS1,100,0\nS1,100,99\n');
		expect([...groups[0].wearable]).toEqual([0, 99]);
		expect(messages[0]).toContain('1 row holds a 0');
	});
});

describe('tables that cannot be used say where and what to do', () => {
	it.each([
		['empty', ''],
		['empty', '\n\n'],
		['missing-column', 'session,ref,wearable\nS1,1,2\n'],
		['missing-column', 'S1,1,2\n'],
		['column-twice', 'session,reference,wearable,wearable\nS1,1,2,3\n'],
		['not-a-number', 'session,reference,wearable\nS1,100,abc\n'],
		['not-a-number', 'session,reference,wearable\nS1,0x64,101\n'],
		['not-a-number', 'session,reference,wearable\nS1,1e999,101\n'],
		['not-a-number', 'session,reference,wearable\nS1,Infinity,101\n'],
		['ragged-row', 'session,reference,wearable\nS1,100\n'],
		['ragged-row', 'session,reference,wearable\nS1,110,5,108,2\n'],
		['no-pairs', 'session,reference,wearable\n'],
		['no-pairs', 'session,reference,wearable\nS1,,\n']
	])('%s: %j', (code, text) => expect(refusal(text)?.code).toBe(code));
	it('names the line and the cell', () => {
		expect(refusal('session,reference,wearable\nS1,1,2\nS1,100,abc\n')?.message).toBe(
			'Line 3: wearable is "abc", which is not a number. Correct it, or leave the cell empty where there was no value.'
		);
	});
});

describe('strata, people and analyses', () => {
	const text =
		'session,participant,device,reference,wearable,in_primary\nS1,P1,A,100,101,1\nS1,P1,B,100,103,1\nS1,P2,A,90,91,0\n';
	it('splits by the columns named', () => {
		expect(read(text, { by: ['device'] }).groups.map((g) => [g.session, g.stratum])).toEqual([
			['S1', ['A']],
			['S1', ['B']]
		]);
	});
	it('keeps people apart when they count', () => {
		expect(read(text, { participantColumn: 'participant' }).groups.map((g) => g.participant)).toEqual(['P1', 'P2']);
	});
	it('counts only the rows that the table marks', () => {
		expect(read(text, { onlyWhere: 'in_primary' }).groups.map((g) => g.reference.length)).toEqual([2]);
		expect(refusal(text.replace(',1\n', ',yes\n'), { onlyWhere: 'in_primary' })?.code).toBe('not-a-flag');
	});
});
