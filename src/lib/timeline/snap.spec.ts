import { describe, expect, it } from 'vitest';
import { cadenceChanges, edgesOfReadings, nearestSnap, snapTargets } from './snap';
import { session, sinceStart, tag } from './testing/session-in-hand';

const seconds = (n: number, keep: (i: number) => boolean = () => true) => Float64Array.from(Array.from({ length: n }, (_, i) => i).filter(keep));

describe('what an edge snaps to', () => {
	it('finds the first and last reading and both ends of a gap, not the ordinary spacing', () => {
		expect(edgesOfReadings({ tS: seconds(100, (i) => i < 40 || i >= 60) })).toEqual([0, 39, 60, 99]);
		expect(edgesOfReadings({ tS: seconds(100, (i) => i % 4 === 0) })).toEqual([0, 96]);
		expect(edgesOfReadings({ tS: new Float64Array(0) })).toEqual([]);
	});

	it('finds where the wearer stops and goes on, to the second, and not a slow change of pace', () => {
		const tS = seconds(200);
		expect(cadenceChanges({ tS, value: tS.map((t) => (t >= 80 && t < 120 ? 0 : 160)) })).toEqual([80, 120]);
		expect(cadenceChanges({ tS, value: tS.map((t) => 150 + t * 0.2) })).toEqual([]);
	});

	it('puts other traces’ edges on the axis and leaves out the tag’s own trace', () => {
		const state = session({ tags: [tag('a', 50, 100), tag('b', 200, 240, { recordingId: 'ostrel' })] });
		const targets = snapTargets(state, 'ostrel').map(sinceStart);
		expect(targets).toContain(53);
		expect(targets).toContain(103);
		expect(targets).not.toContain(200);
	});

	it('takes the nearest within reach, and nothing beyond it', () => {
		expect(nearestSnap([10, 14, 30], 13, 3)).toBe(14);
		expect(nearestSnap([10, 30], 20, 3)).toBeNull();
	});
});
