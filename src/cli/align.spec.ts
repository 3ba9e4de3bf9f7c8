import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, beforeEach, expect, test, vi } from 'vitest';
import type { Trace } from '../lib/formats/recording';
import { writeFit } from '../lib/formats/write';
import { simulateSession } from '../lib/simulate';
import { align } from './align';

const session = simulateSession({ seed: 12, activity: 'run-intervals', durationS: 1500, preset: 'lag', wearables: [{ clockOffsetS: 3604.5 }] });
const device = { maker: null, product: 'Wrenna Loop 2', serial: '5531', firmware: '2.04' };
let folder: string;
let lines: string[];
const path = (name: string) => join(folder, name);
const write = (name: string, traces: (Trace | null)[]) => writeFileSync(path(name), writeFit({ device, activity: 'running', traces: traces.filter((t) => t !== null) }));

beforeAll(() => {
	folder = mkdtempSync(join(tmpdir(), 'align-'));
	const [wearable] = session.wearables;
	write('strap.fit', [session.reference.heartRate, session.reference.cadence]);
	write('watch.fit', [wearable.heartRate, wearable.cadence]);
	write('watch-heart-only.fit', [wearable.heartRate]);
	write('no-heart.fit', [session.reference.cadence]);
	write('short.fit', [{ ...wearable.heartRate, tS: wearable.heartRate.tS.slice(0, 30), value: wearable.heartRate.value.slice(0, 30) }]);
	writeFileSync(path('letter.fit'), 'Dear team, the file is attached.');
});
afterAll(() => rmSync(folder, { recursive: true }));
beforeEach(() => {
	lines = [];
	vi.spyOn(console, 'log').mockImplementation((line: unknown) => void lines.push(String(line)));
	vi.spyOn(console, 'error').mockImplementation(() => {});
});
afterEach(() => vi.restoreAllMocks());

const run = async (...names: string[]) => {
	const status = await align(names.map(path));
	return { status, answers: lines.map((line) => JSON.parse(line) as Record<string, unknown>) };
};

test('a pair gives the promised fields, shifts to be added to the wearable, the zone mistake in words', async () => {
	const { status, answers } = await run('strap.fit', 'watch.fit');
	expect(status).toBe(0);
	expect(answers).toHaveLength(1);
	const [answer] = answers;
	expect(Object.keys(answer)).toEqual(expect.arrayContaining(['bestFitShiftS', 'ci95', 'reliable', 'reason', 'candidates', 'clockOffsetS', 'clockOffsetCi95', 'responseLagS']));
	const { truth } = session.wearables[0];
	expect(Math.abs((answer.bestFitShiftS as number) - truth.totalShiftS)).toBeLessThan(1);
	expect(Math.abs((answer.clockOffsetS as number) - truth.clockOffsetS)).toBeLessThan(2.5);
	expect(answer.reliable).toBe(true);
	expect(answer.reason).toContain('whole-hour mistake of +1 h');
	expect((answer.candidates as { shiftS: number; score: number }[])[0].shiftS).toBe(answer.bestFitShiftS);
});

test('what cannot be known is null', async () => {
	const { status, answers } = await run('strap.fit', 'watch-heart-only.fit', 'strap.fit', 'short.fit');
	expect(status).toBe(0);
	expect(answers[0]).toMatchObject({ clockOffsetS: null, clockOffsetCi95: null, responseLagS: null });
	expect(answers[1]).toMatchObject({ bestFitShiftS: null, ci95: null, reliable: false, candidates: [] });
	expect(answers[1].reason).toMatch(/^Not determinable/);
});

test('files that cannot be used are lines with an error and a remedy, the pairs around them are still done', async () => {
	const { status, answers } = await run('strap.fit', 'absent.fit', 'letter.fit', 'watch.fit', 'no-heart.fit', 'watch.fit', 'strap.fit', 'watch.fit');
	expect(status).toBe(1);
	expect(answers.map((a) => (a.error as { code: string } | undefined)?.code ?? 'aligned')).toEqual(['not-found', expect.any(String), 'no-heart-rate', 'aligned']);
	expect(answers[0]).toMatchObject({ file: path('absent.fit') });
	expect(answers[1]).toMatchObject({ file: path('letter.fit') });
	for (const answer of answers.slice(0, 3)) expect((answer.error as { message: string }).message.length).toBeGreaterThan(20);
});

test('a file without a partner is told, the pairs before it are done', async () => {
	const { status, answers } = await run('strap.fit', 'watch.fit', 'strap.fit');
	expect(status).toBe(1);
	expect(answers[0].bestFitShiftS).toEqual(expect.any(Number));
	expect(answers[1]).toMatchObject({ file: path('strap.fit'), error: { code: 'no-partner' } });
});

test('without files it says what it takes', async () => {
	expect((await run()).status).toBe(2);
	expect(lines).toEqual([]);
});
