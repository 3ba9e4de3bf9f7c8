import { describe, expect, it } from 'vitest';
import { readTime } from './read-time';

const at = (h: number, m: number, s = 0, day = 14) => Date.UTC(2025, 9, day, h, m, s) / 1000;

describe('going to a time', () => {
	const from = at(7, 31);
	const to = at(8, 15);
	it('takes clock times with and without seconds, and minutes from the start', () => {
		expect(readTime('07:51:28', from, to)).toEqual({ ok: true, axisS: at(7, 51, 28) });
		expect(readTime(' 8:02 ', from, to)).toEqual({ ok: true, axisS: at(8, 2) });
		expect(readTime('+12.5', from, to)).toEqual({ ok: true, axisS: at(7, 43, 30) });
		expect(readTime('+12:30', from, to)).toEqual({ ok: true, axisS: at(7, 43, 30) });
	});

	it('finds the right day in a session over midnight', () => {
		expect(readTime('00:10', at(23, 30), at(1, 30, 0, 15))).toEqual({ ok: true, axisS: at(0, 10, 0, 15) });
	});

	it('says what is wrong instead of going somewhere else', () => {
		expect(readTime('09:00', from, to)).toEqual({ ok: false, why: '09:00:00 lies outside the session, 07:31:00 to 08:15:00.' });
		expect(readTime('25:00', from, to).ok).toBe(false);
		expect(readTime('soon', from, to)).toMatchObject({ ok: false, why: expect.stringContaining('07:51:28') });
	});
});
