/**
 * Agreement at size: all figures of a million and of ten million pairs, and the bootstrap of 500 sessions, each beside
 * numpy where python3 with numpy is there, else beside the plain many-pass form in the same language.
 */
import { spawnSync } from 'node:child_process';
import { bootstrapFigures } from '../../lib/agreement/bootstrap';
import { agreementFigures, figuresOfSessions } from '../../lib/agreement/figures';
import { gaussian, sfc32 } from '../../lib/agreement/random';
import { sumSession, type PairGroup } from '../../lib/agreement/sessions';
import type { BenchRow } from './row';

const RUNS = 5;
/** Ours and the rival take turns, so that whatever else the machine does meets both. */
const TURNS = 3;
const SESSION_READINGS = 3600;

/** Sessions of 3600 readings that look like heart rate: whole bpm, a difference of each session, stretches at half the rate. */
function someSessions(pairs: number): PairGroup[] {
	const next = sfc32(1);
	const groups: PairGroup[] = [];
	for (let start = 0; start < pairs; start += SESSION_READINGS) {
		const n = Math.min(SESSION_READINGS, pairs - start);
		const reference = new Float64Array(n);
		const wearable = new Float64Array(n);
		const shift = 2 * gaussian(next);
		for (let i = 0; i < n; i++) {
			reference[i] = Math.round(130 + 40 * Math.sin((start + i) / 700));
			wearable[i] = i % 400 < 12 ? Math.round(reference[i] / 2) : Math.round(reference[i] + shift + 3 * gaussian(next));
		}
		groups.push({ session: `S${groups.length}`, participant: `P${groups.length % 40}`, reference, wearable });
	}
	return groups;
}

function medianMs(work: () => void): number {
	const times: number[] = [];
	work();
	for (let run = 0; run < RUNS; run++) {
		const start = performance.now();
		work();
		times.push(performance.now() - start);
	}
	return times.sort((a, b) => a - b)[RUNS >> 1];
}

/** The same measures in numpy, each in its fastest plain form, over the same kind of data. */
const NUMPY_FIGURES = `
import json, sys, time, numpy as np
n, runs = int(sys.argv[1]), int(sys.argv[2])
r = np.random.default_rng(1)
x = np.round(130 + 40 * np.sin(np.arange(n) / 700.0))
s = np.arange(n) // 3600
k = int(s[-1]) + 1
y = np.round(x + (2 * r.standard_normal(k))[s] + 3 * r.standard_normal(n))
h = np.arange(n) % 400 < 12
y[h] = np.round(x[h] / 2)
starts = np.arange(0, n, 3600)
def figures():
    d = y - x; a = np.abs(d); m = len(d)
    rel = a / x; ratio = y / x
    mx, my, md = x.mean(), y.mean(), d.mean()
    cx, cy, cd = x - mx, y - my, d - md
    sxx, syy, sxy, sdd = cx @ cx, cy @ cy, cx @ cy, cd @ cd
    ni = np.diff(np.append(starts, m))
    si = np.add.reduceat(d, starts); qi = np.add.reduceat(d * d, starts)
    ssw = (qi - si * si / ni).sum(); ssb = (ni * (si / ni - md) ** 2).sum()
    n0 = (m * m - (ni * ni).sum()) / ((k - 1) * m); msb = ssb / (k - 1); msw = ssw / (m - k)
    a_i = np.add.reduceat(a, starts); p_i = np.add.reduceat(rel, starts)
    w5, w5p, w10 = a <= 5, rel <= .05, rel <= .1
    share_i = [np.add.reduceat(w, starts, dtype=np.int64) for w in (w5, w10)]
    return (md, np.sqrt(sdd / (m - 1)), np.sqrt(msw + (msb - msw) / n0), a.mean(), 100 * rel.mean(), np.sqrt((d @ d) / m),
            sxy / np.sqrt(sxx * syy), 2 * sxy / (sxx + syy + m * md * md), w5.mean(), w5p.mean(), w10.mean(), (w5 | w10).mean(),
            (np.abs(ratio - .5) <= .05).mean(), (np.abs(ratio - 2) <= .2).mean(), np.percentile(a, [50, 95]), a_i, p_i, share_i)
figures()
times = []
for _ in range(runs):
    t = time.perf_counter(); figures(); times.append((time.perf_counter() - t) * 1e3)
print(json.dumps(sorted(times)[runs // 2]))
`;

/** Bootstrap of sums in numpy: draws counted into a matrix and multiplied, and gathered rows; the faster one counts. */
const NUMPY_BOOTSTRAP = `
import json, sys, time, numpy as np
b, k, c, runs = (int(v) for v in sys.argv[1:5])
r = np.random.default_rng(1)
sums = r.random((k, c)); ends = np.array([.025, .975])
def finish(t): return np.percentile(t[:, 1:] / t[:, :1], ends * 100, axis=0)
def counted():
    i = r.integers(0, k, (b, k), dtype=np.uint16)
    w = np.bincount((i + (np.arange(b) * k)[:, None]).ravel(), minlength=b * k).reshape(b, k).astype(float)
    return finish(w @ sums)
def gathered():
    i = r.integers(0, k, (b, k), dtype=np.uint16)
    return finish(np.stack([np.take(sums[:, j], i).sum(1) for j in range(c)], 1))
def multinomial(): return finish(r.multinomial(k, np.full(k, 1 / k), size=b) @ sums)
best = 1e9
for form in (counted, gathered, multinomial):
    form(); times = []
    for _ in range(runs):
        t = time.perf_counter(); form(); times.append((time.perf_counter() - t) * 1e3)
    best = min(best, sorted(times)[runs // 2])
print(json.dumps(best))
`;

/** Milliseconds that a python script prints, or null without python3 and numpy. */
function numpyMs(script: string, args: number[]): number | null {
	const run = spawnSync('python3', ['-c', script, ...args.map(String)], { encoding: 'utf8' });
	if (run.error || run.status !== 0) return null;
	const value: unknown = JSON.parse(run.stdout);
	return typeof value === 'number' ? value : null;
}

/** The main measures one array at a time, as they stand in a textbook. */
function manyPasses(groups: PairGroup[]): number[] {
	const x = groups.flatMap((g) => Array.from(g.reference));
	const y = groups.flatMap((g) => Array.from(g.wearable));
	const mean = (v: number[]) => v.reduce((sum, one) => sum + one, 0) / v.length;
	const d = y.map((v, i) => v - x[i]);
	const a = d.map(Math.abs);
	const [mx, my, md] = [mean(x), mean(y), mean(d)];
	const sxx = mean(x.map((v) => (v - mx) ** 2));
	const syy = mean(y.map((v) => (v - my) ** 2));
	const sxy = mean(x.map((v, i) => (v - mx) * (y[i] - my)));
	const sorted = Float64Array.from(a).sort();
	return [
		md,
		Math.sqrt(mean(d.map((v) => (v - md) ** 2))),
		mean(a),
		mean(a.map((v, i) => v / x[i])),
		Math.sqrt(mean(d.map((v) => v * v))),
		sxy / Math.sqrt(sxx * syy),
		(2 * sxy) / (sxx + syy + (mx - my) ** 2),
		mean(a.map((v) => (v <= 5 ? 1 : 0))),
		mean(a.map((v, i) => (v <= x[i] / 10 ? 1 : 0))),
		sorted[sorted.length >> 1]
	];
}

function inTurns(ours: () => number, rival: () => number | null): [number, number | null] {
	const ourTimes: number[] = [];
	const rivalTimes: number[] = [];
	for (let turn = 0; turn < TURNS; turn++) {
		ourTimes.push(ours());
		const rivalMs = rival();
		if (rivalMs !== null) rivalTimes.push(rivalMs);
	}
	const middle = (times: number[]) => times.sort((a, b) => a - b)[times.length >> 1];
	return [middle(ourTimes), rivalTimes.length ? middle(rivalTimes) : null];
}

function row(name: string, ours: number, rival: string, rivalMs: number | null): BenchRow {
	return { name, ours_ms: ours, rival, rival_ms: rivalMs, ratio: rivalMs === null ? null : ours / rivalMs };
}

/** Rows of the bench. Data are made outside the measured time on both sides. */
export async function benchAgreement(): Promise<BenchRow[]> {
	const rows: BenchRow[] = [];
	for (const [pairs, name] of [
		[1_000_000, 'agreement figures, 1 000 000 pairs'],
		[10_000_000, 'agreement figures, 10 000 000 pairs']
	] as const) {
		const groups = someSessions(pairs);
		const [ours, numpy] = inTurns(
			() => medianMs(() => agreementFigures(groups)),
			() => numpyMs(NUMPY_FIGURES, [pairs, RUNS])
		);
		if (numpy !== null) rows.push(row(name, ours, 'numpy, the same measures', numpy));
		else if (pairs <= 1_000_000)
			rows.push(
				row(
					name,
					ours,
					'one array at a time, no numpy here',
					medianMs(() => manyPasses(groups))
				)
			);
		else rows.push(row(name, ours, 'none: no numpy here', null));
	}
	const study = someSessions(500 * SESSION_READINGS);
	const sums = study.map(sumSession);
	const resample = () => bootstrapFigures(sums, { resamples: 10_000, seed: 1, figures: ['bias', 'mae'] });
	const [drawn, drawnByNumpy] = inTurns(
		() => medianMs(resample),
		() => numpyMs(NUMPY_BOOTSTRAP, [10_000, 500, 3, RUNS])
	);
	rows.push(row('bootstrap of bias and MAE, 10 000 × 500 sessions', drawn, 'numpy, best of three forms', drawnByNumpy));
	const [refreshed, recomputed] = inTurns(
		() =>
			medianMs(() => {
				sums[7] = sumSession(study[7]);
				figuresOfSessions(sums, { pairs: study });
			}),
		() => medianMs(() => agreementFigures(study))
	);
	rows.push(row('study of 500 sessions after one changed tag', refreshed, 'everything recomputed', recomputed));
	return rows;
}
