import { describe, expect, it } from 'vitest';
import { outlineOf } from './outline';

const trace = (points: [number, number][]) => ({ tS: Float64Array.from(points, (p) => p[0]), value: Float64Array.from(points, (p) => p[1]) });

describe('thin line of a recording', () => {
	it('keeps a spike of a single second', () => {
		const points = Array.from({ length: 3000 }, (_, i): [number, number] => [i, i === 1234 ? 205 : 120]);
		const { max, min } = outlineOf(trace(points), { startS: 0, endS: 2999 }, 300);
		expect(Math.max(...max.map((v) => v ?? 0))).toBe(205);
		expect(min.every((v) => v === 120)).toBe(true);
	});
	it('leaves a dropout open', () => {
		const points = Array.from({ length: 600 }, (_, i): [number, number] => [i < 300 ? i : i + 400, 130]);
		const { max } = outlineOf(trace(points), { startS: 0, endS: 999 }, 100);
		expect(max.slice(32, 68).every((v) => v === null)).toBe(true);
		expect(max[10]).toBe(130);
	});
	it('does not break the line of a device that writes every seven seconds', () => {
		const points = Array.from({ length: 60 }, (_, i): [number, number] => [i * 7, 100 + i]);
		const { max } = outlineOf(trace(points), { startS: 0, endS: 413 }, 300);
		expect(max.some((v) => v === null)).toBe(false);
	});
});
