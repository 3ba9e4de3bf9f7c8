import { describe, expect, it } from 'vitest';
import { clockTicks } from './clock-rule';

describe('clock rule of a session', () => {
	it('keeps its labels apart at every length from ten minutes to a day', () => {
		for (const lengthS of [600, 2700, 10_800, 86_400]) {
			const major = clockTicks(1_000_000, 1_000_000 + lengthS, 560).filter((t) => t.rank === 'major');
			const px = major.map((t) => ((t.tS - 1_000_000) / lengthS) * 560);
			for (let i = 1; i < px.length; i++) expect(px[i] - px[i - 1]).toBeGreaterThanOrEqual(96);
		}
	});
	it('stands on whole minutes, inside the band', () => {
		const ticks = clockTicks(1_000_030, 1_002_700, 560);
		expect(ticks.every((t) => t.tS % 60 === 0 && t.tS >= 1_000_030 && t.tS <= 1_002_700)).toBe(true);
		expect(ticks.some((t) => t.rank === 'major')).toBe(true);
	});
});
