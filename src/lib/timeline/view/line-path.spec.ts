import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drawLine, gapLimitS, PathText, valueAt, type LineSamples, type PathSink } from './line-path';

class Strokes implements PathSink {
	lines: [number, number][][] = [];
	moveTo(x: number, y: number) {
		this.lines.push([[x, y]]);
	}
	lineTo(x: number, y: number) {
		this.lines[this.lines.length - 1].push([x, y]);
	}
}

const everySecond = (values: number[], startS = 1000): LineSamples => {
	const tS = Float64Array.from(values, (_, i) => startS + i);
	return { tS, value: Float64Array.from(values), gapS: gapLimitS(tS) };
};
const still = { offsetS: 0, driftPpm: 0 };
const y = (v: number) => v;

describe('a drawn line', () => {
	it('passes through every reading where there is room for them', () => {
		const sink = new Strokes();
		const { dense } = drawLine(sink, everySecond([60, 61, 62]), { fromS: 1000, toS: 1002, widthPx: 100 }, y, still, 1000);
		expect(dense).toBe(false);
		expect(sink.lines).toEqual([[[0, 60], [50, 61], [100, 62]]]);
	});

	it('never joins across missing readings', () => {
		const tS = Float64Array.from([...Array.from({ length: 20 }, (_, i) => i), ...Array.from({ length: 20 }, (_, i) => 27 + i)]);
		const samples = { tS, value: new Float64Array(40).fill(100), gapS: gapLimitS(tS) };
		const sink = new Strokes();
		drawLine(sink, samples, { fromS: 0, toS: 46, widthPx: 460 }, y, still, 0);
		expect(sink.lines.map((l) => [l[0][0], l[l.length - 1][0]])).toEqual([[0, 190], [270, 460]]);
	});

	it('breaks at a reading that is not a number', () => {
		const sink = new Strokes();
		drawLine(sink, { ...everySecond([1, 2, NaN, 4, 5]), gapS: 3 }, { fromS: 1000, toS: 1004, widthPx: 40 }, y, still, 1000);
		expect(sink.lines.map((l) => l.length)).toEqual([2, 2]);
	});

	it('keeps a spike of a single reading in its place, whichever it is, when there are many readings a pixel', () => {
		fc.assert(
			fc.property(fc.integer({ min: 500, max: 2000 }), fc.double({ min: 0, max: 0.999, noNaN: true }), fc.constantFrom(45, 210), (n, share, spike) => {
				const at = Math.floor(share * n);
				const sink = new Strokes();
				const values = new Array<number>(n).fill(90);
				values[at] = spike;
				const { dense } = drawLine(sink, everySecond(values), { fromS: 1000, toS: 1000 + n, widthPx: 60 }, y, still, 1000);
				const ink = sink.lines.flat();
				return dense && ink.some(([x, v]) => v === spike && Math.abs(x - (at * 60) / n) <= 1.01) && ink.every(([, v]) => v === 90 || v === spike);
			})
		);
	});

	it('covers, as columns, the way from each reading to the next, and stays open across a gap', () => {
		const columns: [number, number, number][] = [];
		const sink = { moveTo() {}, lineTo() {}, column: (x: number, from: number, to: number) => columns.push([x, from, to]) };
		const tS = Float64Array.from([...Array.from({ length: 300 }, (_, i) => i), ...Array.from({ length: 300 }, (_, i) => 900 + i)]);
		const value = tS.map((t) => (t < 150 ? 60 : 160));
		drawLine(sink, { tS, value, gapS: 3 }, { fromS: 0, toS: 1200, widthPx: 120 }, (v) => -v, still, 0);
		expect(columns.find(([x]) => x === 15)).toEqual([15, -160, -60]);
		expect(columns.some(([x]) => x > 30 && x < 89)).toBe(false);
		expect(columns.find(([x]) => x === 90)).toEqual([90, -160, -160]);
	});

	it('keeps a long gap open when there are many readings a pixel', () => {
		const tS = Float64Array.from([...Array.from({ length: 600 }, (_, i) => i), ...Array.from({ length: 600 }, (_, i) => 1200 + i)]);
		const sink = new Strokes();
		drawLine(sink, { tS, value: new Float64Array(1200).fill(90), gapS: gapLimitS(tS) }, { fromS: 0, toS: 1800, widthPx: 90 }, y, still, 0);
		expect(sink.lines).toHaveLength(2);
		expect(sink.lines[0].at(-1)![0]).toBeLessThan(31);
		expect(sink.lines[1][0][0]).toBeGreaterThan(59);
	});

	it('moves with the offset, one to one, and draws what comes into view', () => {
		const samples = everySecond(Array.from({ length: 200 }, (_, i) => i));
		const frame = { fromS: 1050, toS: 1060, widthPx: 100 };
		const first = new Strokes();
		const second = new Strokes();
		drawLine(first, samples, frame, y, still, 1000);
		drawLine(second, samples, frame, y, { offsetS: 2, driftPpm: 0 }, 1000);
		const xOf = (sink: Strokes, value: number) => sink.lines.flat().find(([, v]) => v === value)![0];
		expect(xOf(second, 52) - xOf(first, 52)).toBeCloseTo(20, 6);
		expect(second.lines.flat().some(([, v]) => v === 48)).toBe(true);
	});

	it('leaves a mark for a recording of one single reading', () => {
		const sink = new Strokes();
		drawLine(sink, everySecond([77]), { fromS: 990, toS: 1010, widthPx: 100 }, y, still, 1000);
		expect(sink.lines.at(-1)).toEqual([[49, 77], [51, 77]]);
	});

	it('draws nothing, and does not fail, for an empty recording', () => {
		const sink = new PathText();
		drawLine(sink, everySecond([]), { fromS: 0, toS: 1, widthPx: 10 }, y, still, 0);
		expect(sink.toString()).toBe('');
	});
});

describe('the value at the cursor', () => {
	it('is the reading itself on its stamp and lies between neighbours elsewhere', () => {
		const samples = everySecond([60, 70, 80]);
		expect(valueAt(samples, 1001)).toBe(70);
		expect(valueAt(samples, 1001.5)).toBe(75);
	});

	it('is nothing inside a gap and outside the recording', () => {
		const tS = Float64Array.from([0, 1, 2, 3, 30, 31, 32, 33]);
		const samples = { tS, value: new Float64Array(8).fill(90), gapS: gapLimitS(tS.subarray(0, 4)) };
		expect(valueAt(samples, 12)).toBeNull();
		expect(valueAt(samples, -5)).toBeNull();
		expect(valueAt(samples, 40)).toBeNull();
	});
});
