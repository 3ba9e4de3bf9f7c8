import { expect, test } from 'vitest';
import { csvCell } from './csv';

test('a name with a comma or a quote stays one cell', () => {
	expect(csvCell('Loop 2, blue')).toBe('"Loop 2, blue"');
	expect(csvCell('the "old" one')).toBe('"the ""old"" one"');
});

test('a name that looks like a formula does not run in a spreadsheet', () => {
	expect(csvCell('=1+1')).toBe("'=1+1");
	expect(csvCell('-1.18')).toBe('-1.18');
});
