import { describe, expect, it } from 'vitest';
import { DEFAULT_TAG_KINDS } from '../../agreement';
import type { BenchTrack } from './bench-track';
import type { LaneTag } from './lane-layout';
import { cursorInWords, obstacles, offsetInWords, summaryInWords, tableOf, trustInWords } from './plot-in-words';

const T0 = Date.UTC(2025, 9, 14, 7, 51, 0) / 1000;
function track(number: number, shortName: string, startS: number, values: number[]): BenchTrack {
	const tS = Float64Array.from(values, (_, i) => startS + i);
	return {
		recordingId: `rec-${number}`, number, role: number === 0 ? 'reference' : 'wearable', name: `${shortName} strap`, shortName,
		heartRate: { tS, value: Float64Array.from(values), gapS: 3 }, cadence: null, firstS: values.length ? startS : 0, lastS: values.length ? startS + values.length - 1 : 0
	};
}
const still = () => ({ offsetS: 0, driftPpm: 0 });
const lock: LaneTag = { id: 't', recordingId: 'rec-1', kind: DEFAULT_TAG_KINDS.find((k) => k.key === 'cadence-lock')!, fromS: T0 + 20, toS: T0 + 40, proposed: false, held: false, out: true };

describe('the plot in words', () => {
	const halden = track(0, 'Halden', T0, new Array<number>(60).fill(150));
	const wrenna = track(1, 'Wrenna', T0, [...new Array<number>(28).fill(150), 170, ...new Array<number>(31).fill(150)]);
	const corvane = track(3, 'Corvane', T0, new Array<number>(60).fill(146));

	it('says what stands at the cursor, with the side of each difference and the tag it stands in', () => {
		const values: Record<string, { bpm: number | null; differenceBpm: number | null }> = {
			'rec-0': { bpm: 150, differenceBpm: 0 }, 'rec-1': { bpm: 170, differenceBpm: 20 }, 'rec-3': { bpm: 146, differenceBpm: -4 }
		};
		expect(cursorInWords(T0 + 28, [halden, wrenna, corvane], (id) => values[id], [[], [lock], []])).toBe(
			'07:51:28. Halden 150. Wrenna 170, 20 above, in cadence lock. Corvane 146, 4 below.'
		);
	});

	it('says that there is no reading rather than a number', () => {
		expect(cursorInWords(T0, [wrenna], () => ({ bpm: null, differenceBpm: null }), [[]])).toBe('07:51:00. Wrenna no reading.');
	});

	it('sums up span, traces, gaps, tags and the largest difference', () => {
		const words = summaryInWords('S07', [halden, wrenna, corvane], still, [[], [lock], []]);
		expect(words).toContain('S07, 07:51:00 to 07:51:59 UTC, 59 s.');
		expect(words).toContain('3 traces: Halden strap (reference), 1 Wrenna strap, 3 Corvane strap.');
		expect(words).toContain('1 tag.');
		expect(words).toContain('Largest difference of Wrenna: 20 above at 07:51:28.');
	});

	it('reads as a table with a row every 10 s', () => {
		const { stepS, rows } = tableOf(T0, T0 + 30, [halden, wrenna], still);
		expect(stepS).toBe(10);
		expect(rows.map((r) => r.values[1])).toHaveLength(4);
		expect(rows[1].values[1]).toEqual({ recordingId: 'rec-1', bpm: 150, differenceBpm: 0 });
	});

	it('speaks the offset with its correlation and how far it is from the peak', () => {
		expect(offsetInWords(3.42, 0.965, 3.42, false)).toBe('plus 3.42 seconds, correlation 0.965, at the peak');
		expect(offsetInWords(-1.18, null, -1.28, true)).toBe('minus 1.18 seconds, 0.10 seconds above the peak, locked');
	});

	it('never claims trust where the search found nothing', () => {
		expect(trustInWords(null)).toBe('not searched yet');
		expect(trustInWords({ bestFitShiftS: null, ci95: null, reliable: false, reasonCode: 'too-short', reason: '', candidates: [], clockOffsetS: null, clockOffsetCi95: null, responseLagS: null })).toBe('not determinable');
	});
});

describe('what keeps a session from being compared', () => {
	const halden = track(0, 'Halden', T0, new Array<number>(60).fill(150));
	it('is said for a missing reference, a lone reference, one single reading, no heart rate', () => {
		expect(obstacles([], still)[0]).toContain('no recordings');
		expect(obstacles([track(1, 'Wrenna', T0, [1, 2])], still)[0]).toContain('no reference');
		expect(obstacles([halden], still)[0]).toContain('reference alone');
		expect(obstacles([halden, track(1, 'Wrenna', T0, [150])], still)[0]).toContain('one single reading');
		expect(obstacles([halden, track(1, 'Wrenna', T0, [])], still)[0]).toContain('no heart rate');
	});

	it('is said with the distance for recordings that lie apart in time, and is silent when all is there', () => {
		const late = track(1, 'Wrenna', T0 + 3600, new Array<number>(60).fill(150));
		expect(obstacles([halden, late], still)[0]).toContain('begins 59 min after the reference ends');
		expect(obstacles([halden, late], (id) => ({ offsetS: id === 'rec-1' ? -3600 : 0, driftPpm: 0 }))).toEqual([]);
	});
});
