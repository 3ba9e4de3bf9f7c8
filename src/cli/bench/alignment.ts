/**
 * Alignment at length: plain correlation and the whole offset search of three hours and of a day, each beside scipy and
 * numpy where python3 has them, else beside one plain transform of the same length.
 */
import { spawnSync } from 'node:child_process';
import FFT from 'fft.js';
import { coarseSearch, crossCorrelate, estimateBestFitShift } from '../../lib/signal';
import { heartRateGrid } from '../../lib/signal/second-grid';
import { randomStream, simulateSession } from '../../lib/simulate';
import type { Trace } from '../../lib/formats/recording';
import type { BenchRow } from './row';

const RUNS = 9;
/** Ours and the rival take turns, so that whatever else the machine does meets both. */
const TURNS = 3;
const THREE_HOURS_S = 10_800;
const DAY_S = 86_400;

/** All lags of two columns by scipy, and by numpy with values missing on both sides: six products by transforms (Padfield 2012). */
const PYTHON = `
import json, sys, time, numpy as np
from scipy import signal, fft
n, runs, seed = int(sys.argv[1]), int(sys.argv[2]), int(sys.argv[3])
r = np.random.default_rng(seed)
a, b = r.standard_normal(n), r.standard_normal(n)
ma, mb = np.ones(n), np.ones(n)
for m in (ma, mb):
    for g in r.integers(0, n - 90, 4): m[g:g + 90] = 0
def plain(): return signal.correlate(a, b, method='fft')
def masked():
    size = fft.next_fast_len(2 * n - 1, True)
    f = lambda x: fft.rfft(x, size)
    x, y = a * ma, b * mb
    fx, fy, fm, fn = f(x), np.conj(f(y)), f(ma), np.conj(f(mb))
    fxx, fyy = f(x * x), np.conj(f(y * y))
    inv = lambda z: fft.irfft(z, size)
    count = np.maximum(np.round(inv(fm * fn)), 1)
    sx, sy = inv(fx * fn), inv(fm * fy)
    top = inv(fx * fy) - sx * sy / count
    low = np.sqrt(np.maximum(inv(fxx * fn) - sx * sx / count, 0) * np.maximum(inv(fm * fyy) - sy * sy / count, 0))
    return np.where(low > 1e-9, top / np.maximum(low, 1e-9), 0)
out = {}
for name, work in (('plain', plain), ('masked', masked)):
    work(); times = []
    for _ in range(runs):
        t = time.perf_counter(); work(); times.append((time.perf_counter() - t) * 1e3)
    out[name] = sorted(times)[runs // 2]
print(json.dumps(out))
`;

interface PythonTimes {
	plain: number;
	masked: number;
}

/** Median milliseconds in python, or null without python3, numpy and scipy. */
function pythonTimes(n: number, runs: number): PythonTimes | null {
	const run = spawnSync('python3', ['-c', PYTHON, String(n), String(runs), '7'], { encoding: 'utf8', env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' } });
	if (run.error || run.status !== 0) return null;
	const value: unknown = JSON.parse(run.stdout);
	return typeof value === 'object' && value !== null && 'plain' in value && 'masked' in value && typeof value.plain === 'number' && typeof value.masked === 'number'
		? { plain: value.plain, masked: value.masked }
		: null;
}

function medianMs(runs: number, work: () => void): number {
	const times: number[] = [];
	work();
	for (let run = 0; run < runs; run++) {
		const start = performance.now();
		work();
		times.push(performance.now() - start);
	}
	return middle(times);
}

const middle = (times: number[]) => [...times].sort((a, b) => a - b)[times.length >> 1];

function noise(n: number, name: string): Float64Array {
	const random = randomStream(7, name);
	return Float64Array.from({ length: n }, () => random.normal());
}

/** One complex transform forth and back at the power of two that holds all lags: what any correlation by fft.js costs at least twice over. */
function plainTransform(n: number): () => void {
	let size = 2;
	while (size < 2 * n - 1) size *= 2;
	const plan = new FFT(size);
	const input = new Float64Array(2 * size);
	input.set(noise(n, 'a'));
	const output = new Float64Array(2 * size);
	return () => {
		plan.transform(output, input);
		plan.inverseTransform(input, output);
	};
}

interface Pair {
	reference: Trace;
	wearable: Trace;
	shiftS: number;
}

/** A ride of this length with ordinary faults and a clock two minutes and some off. */
function pair(lengthS: number): Pair {
	const session = simulateSession({ seed: 3, activity: 'ride-outdoor', durationS: lengthS, wearables: [{ clockOffsetS: 137, irregular: false }] });
	return { reference: session.reference.heartRate, wearable: session.wearables[0].heartRate, shiftS: session.wearables[0].truth.totalShiftS };
}

/** Rows of the bench. Data are made outside the measured time on both sides; results are checked. */
export async function benchAlignment(): Promise<BenchRow[]> {
	const rows: BenchRow[] = [];
	for (const [lengthS, word] of [
		[THREE_HOURS_S, '3 h'],
		[DAY_S, '24 h']
	] as const) {
		const runs = lengthS > THREE_HOURS_S ? RUNS >> 1 : 2 * RUNS;
		const a = noise(lengthS, 'a');
		const b = noise(lengthS, 'b');
		const { reference, wearable, shiftS } = pair(lengthS);
		const r = heartRateGrid(reference);
		const w = heartRateGrid(wearable);
		const transform = plainTransform(lengthS);
		const ours = { plain: [] as number[], coarse: [] as number[], whole: [] as number[] };
		const python: PythonTimes[] = [];
		const transforms: number[] = [];
		for (let turn = 0; turn < TURNS; turn++) {
			ours.plain.push(medianMs(runs, () => crossCorrelate(a, b)));
			const times = pythonTimes(lengthS, runs);
			if (times) python.push(times);
			else transforms.push(medianMs(runs, transform));
			ours.coarse.push(medianMs(RUNS >> 1, () => coarseSearch(r, w)));
			ours.whole.push(
				medianMs(RUNS >> 1, () => {
					const found = estimateBestFitShift(reference, wearable).bestFitShiftS;
					if (found === null || Math.abs(found - shiftS) > 5) throw new Error(`The search of ${word} found ${found} s, and ${shiftS} s is right.`);
				})
			);
		}
		const withPython = python.length === TURNS;
		const rival = (name: keyof PythonTimes) => middle(withPython ? python.map((p) => p[name]) : transforms);
		const plainRival = withPython ? 'scipy.signal.correlate (fft)' : 'one fft.js transform, forth and back';
		const maskedRival = withPython ? 'numpy masked correlation alone' : 'one fft.js transform, forth and back';
		rows.push(
			row(`plain correlation, ${word} × ${word}, all lags`, middle(ours.plain), plainRival, rival('plain')),
			row(`offset search at all overlaps, ${word} pair`, middle(ours.coarse), maskedRival, rival('masked')),
			row(`offset, interval and confidence, ${word} pair`, middle(ours.whole), maskedRival, rival('masked'))
		);
	}
	return rows;
}

const row = (name: string, ours: number, rival: string, rivalMs: number): BenchRow => ({ name, ours_ms: ours, rival, rival_ms: rivalMs, ratio: ours / rivalMs });
