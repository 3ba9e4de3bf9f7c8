import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import cardiac from '../lib/agreement/checks/bland-altman-1999-cardiac-output.json';
import { agree } from './agree';

let folder: string;
let out: string[];
let err: string[];
beforeEach(async () => {
	folder = await mkdtemp(join(tmpdir(), 'agree-'));
	out = [];
	err = [];
	vi.spyOn(process.stdout, 'write').mockImplementation((text) => out.push(String(text)) > 0);
	vi.spyOn(process.stderr, 'write').mockImplementation((text) => err.push(String(text)) > 0);
});
afterEach(async () => {
	vi.restoreAllMocks();
	await rm(folder, { recursive: true });
});
const file = async (name: string, text: string) => {
	await writeFile(join(folder, name), text);
	return join(folder, name);
};
const lines = () =>
	out
		.join('')
		.split('\n')
		.filter(Boolean)
		.map((line) => JSON.parse(line));

const FIRST_FIELDS = [
	'n',
	'sessions',
	'bias',
	'sdNaive',
	'loaNaive',
	'sd',
	'loa',
	'mae',
	'mape',
	'rmse',
	'pearsonR',
	'ccc',
	'within5bpm',
	'within10pct'
];
const LATER_FIELDS = [
	'biasCi95',
	'loaLowerCi95',
	'loaUpperCi95',
	'varBetween',
	'varWithin',
	'cccCi95',
	'icc',
	'deming',
	'medianAbs',
	'p95Abs',
	'withinEc13',
	'halfRateShare',
	'equivalence',
	'coverage'
];

describe('nonius agree', () => {
	it('gives the printed limits for the published table with several pairs a subject (Bland & Altman 1999, 5.3)', async () => {
		const rows = cardiac.input.data.map((r) => `${r[0]},${r[2]},${r[3]}`);
		expect(await agree([await file('cardiac.csv', `session,reference,wearable\n${rows.join('\n')}\n`)])).toBe(0);
		const [line] = lines();
		expect(line).toMatchObject({
			n: 60,
			sessions: 12,
			bias: expect.closeTo(-0.602167, 6),
			sdNaive: expect.closeTo(0.9610571, 7),
			sd: expect.closeTo(0.9906241, 7),
			varBetween: expect.closeTo(0.8106221, 7)
		});
		expect(line.loa).toEqual([expect.closeTo(-2.54379, 5), expect.closeTo(1.339457, 5)]);
		for (const field of [...FIRST_FIELDS, ...LATER_FIELDS]) expect(line).toHaveProperty([field]);
		expect(Object.keys(line.icc)).toEqual(['2,1', '3,1']);
		expect(Object.keys(line.deming)).toEqual(['slope', 'intercept']);
	});
	it('does the other tables when one is refused, and says so in the exit status', async () => {
		const good = await file('good.csv', 'session,reference,wearable\nS1,100,101\nS2,110,112\n');
		const bad = await file('bad.csv', 'session,reference\nS1,100\n');
		expect(await agree([bad, good, join(folder, 'absent.csv')])).toBe(1);
		expect(lines().map((l) => l.error?.code ?? l.n)).toEqual(['missing-column', 2, 'cannot-open']);
		expect(lines()[0].file).toBe(bad);
	});
	it('writes null and tells why on stderr where one session cannot tell', async () => {
		expect(
			await agree([await file('one.csv', 'session,reference,wearable\nS1,100,101\nS1,110,112\nS1,120,119\n')])
		).toBe(0);
		expect(lines()[0]).toMatchObject({ sd: null, loa: null, biasCi95: null, sessions: 1 });
		expect(lines()[0].loaNaive).toHaveLength(2);
		expect(err.join('')).toContain('Not determinable: sd, loa');
	});
	it('splits by activity, rests intervals on people, and takes the margin from the plan', async () => {
		const rows = ['P1', 'P2', 'P3'].flatMap((p, i) =>
			['run', 'row'].flatMap((a) =>
				[1, 2].map((k) => `${p}-${a},${p},${a},${100 + k},${100 + k + i + (a === 'run' ? k : 0)}`)
			)
		);
		const table = await file('t.csv', `session,participant,activity,reference,wearable\n${rows.join('\n')}\n`);
		const plan = await file('plan.json', '{"equivalenceMarginBpm": 12}');
		expect(await agree([table, '--by', 'activity', '--cluster', 'participant,session', '--plan', plan])).toBe(0);
		const [line] = lines();
		expect(line).toMatchObject({ participants: 3, sessions: 6, equivalence: { marginBpm: 12, equivalent: true } });
		expect(line.bootstrap).toMatchObject({
			resamples: 10_000,
			seed: 1,
			bias: { percentile: [expect.any(Number), expect.any(Number)] }
		});
		expect(line.strata.map((s: { by: object; n: number }) => [s.by, s.n])).toEqual([
			[{ activity: 'run' }, 6],
			[{ activity: 'row' }, 6]
		]);
	});
	it.each([
		[[]],
		[['--by']],
		[['x.csv', '--cluster', 'shoe']],
		[['x.csv', '--analysis', 'best']],
		[['x.csv', '--plan', 'absent.json']]
	])('does nothing when it is not understood: %j', async (args) => {
		expect(await agree(args)).toBe(2);
		expect(out).toEqual([]);
		expect(err.join('')).not.toBe('');
	});
	it('refuses a plan that takes the wearable’s faults out of the primary analysis', async () => {
		const plan = await file('plan.json', '{"treatments": {"cadence-lock": {"primary": "out", "cleaned": "out"}}}');
		expect(await agree(['x.csv', '--plan', plan])).toBe(2);
		expect(err.join('')).toContain('cannot leave the primary analysis');
	});
});
