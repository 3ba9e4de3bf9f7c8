import { describe, expect, it } from 'vitest';
import { narrow } from './narrow';

const item = (group: string, name: string, detail = '') => ({ group, name, detail });
const all = [item('Tag', 'Mark as cadence lock', 'already this kind'), item('Go to', 'Next proposal'), item('Show', 'Cadence lane', 'shown'), item('Show', 'Difference strip')];

describe('the command list', () => {
	it('shows everything before anything is typed', () => {
		expect(narrow(all, ' ')).toHaveLength(4);
	});

	it('finds by any part of the name or what it would do, and marks what was typed', () => {
		const found = narrow(all, 'cad');
		expect(found.map((f) => f.item.name)).toEqual(['Mark as cadence lock', 'Cadence lane']);
		expect(found[0].parts).toEqual([{ text: 'Mark as ', hit: false }, { text: 'cad', hit: true }, { text: 'ence lock', hit: false }]);
		expect(narrow(all, 'shown').map((f) => f.item.name)).toEqual(['Cadence lane']);
	});

	it('wants every typed word, in any order', () => {
		expect(narrow(all, 'lock cad').map((f) => f.item.name)).toEqual(['Mark as cadence lock']);
		expect(narrow(all, 'lock xyz')).toEqual([]);
	});
});
