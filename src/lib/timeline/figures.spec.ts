import { describe, expect, it } from 'vitest';
import { isDetermined, pairTraces, type Figures } from '../agreement';
import { after, alignment, heartRate, session, sessionTraces, START_S, tag } from './testing/session-in-hand';
import { nudge, setNote } from './commands';
import { FigureMemory, liveFigures } from './figures';
import { openState, type EditorState } from './state';

const of = (state: EditorState, number: number) => liveFigures(state, new FigureMemory()).find((w) => w.number === number);
const bias = (figures: Figures | null | undefined) => (figures && isDetermined(figures.bias) ? figures.bias : NaN);

describe('live figures', () => {
	it('say what the traces were made with: Wrenna reads 6 high at its offset, Ostrel 2 low', () => {
		expect(bias(of(session(), 1)?.primary)).toBe(6);
		expect(bias(of(session(), 2)?.primary)).toBe(-2);
	});

	it('change with the offset, and only those of the trace that moved are made again', () => {
		const memory = new FigureMemory();
		const state = session();
		const before = liveFigures(state, memory);
		const moved = liveFigures(after(state, [nudge(10)]), memory);
		expect(moved[0].primary?.mae).not.toEqual(before[0].primary?.mae);
		expect(moved[1].table).toBe(before[1].table);
	});

	it('a note on a tag makes nothing again; a tag of the reference makes all again', () => {
		const memory = new FigureMemory();
		const tagged = session({ tags: [tag('a', 50, 100)] });
		const before = liveFigures(tagged, memory);
		expect(liveFigures(after(tagged, [setNote('a', 'x')]), memory)[0].table).toBe(before[0].table);
		const reference = session({ tags: [tag('r', 50, 100, { recordingId: 'halden', kind: 'reference-fault' })] });
		const fresh = liveFigures(reference, memory);
		expect(fresh[1].primary?.n).toBe((before[1].primary?.n ?? 0) - 50);
	});

	it('a wearable fault leaves the cleaned analysis and stays in the primary one; a proposal leaves neither', () => {
		const faulty = of(session({ tags: [tag('a', 50, 100)] }), 1);
		expect([faulty?.primary?.n, faulty?.cleaned?.n]).toEqual([601, 551]);
		const proposed = of(session({ tags: [tag('a', 50, 100, { status: 'proposed' })] }), 1);
		expect(proposed?.cleaned?.n).toBe(601);
	});

	it('are the engine’s own, from the parts that the server would give it', () => {
		const state = session({ tags: [tag('a', 50, 100)] });
		const { kinds, plan } = state.document;
		const table = pairTraces({
			reference: heartRate(0, 0),
			wearable: heartRate(3, 6),
			offsetS: 3,
			driftPpm: 0,
			referenceTags: [],
			wearableTags: [{ kind: 'cadence-lock', startS: START_S + 50, endS: START_S + 100, cleanedOverride: null }],
			plan,
			kinds
		});
		expect(of(state, 1)?.table).toEqual(table);
	});

	it('say why there are none', () => {
		const noReference = session();
		expect(of({ ...noReference, tracks: noReference.tracks.filter((t) => t.number > 0) }, 1)?.why).toContain('no reference');
		expect(of(session({ alignments: {} }), 1)?.why).toContain('No offset');
		expect(of(session({ alignments: { wrenna: alignment(90_000) } }), 1)?.why).toContain('share no moment');
		const traces = sessionTraces();
		traces.set('wrenna', []);
		expect(of(openState(session().document, traces), 1)?.why).toContain('holds no heart rate');
	});

	it('mark an offset that is only proposed and not reliable: the study does not count it yet', () => {
		const doubtful = alignment(3);
		const unreliable = { ...doubtful, estimate: doubtful.estimate && { ...doubtful.estimate, reliable: false } };
		expect(of(session({ alignments: { wrenna: unreliable } }), 1)?.counted).toBe(false);
		expect(of(session({ alignments: { wrenna: { ...unreliable, method: 'hand' } } }), 1)?.counted).toBe(true);
	});
});
