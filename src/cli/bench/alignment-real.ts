/**
 * The alignment on real heart rates: pairs of recordings that do not belong together, and simulated wearables put on
 * top of real heart rate, whose truth is known.
 *
 *     npx tsx src/cli/bench/alignment-real.ts [FOLDER] [--minutes 30] [--wearables 6]
 */
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { readFile } from '../../lib/formats';
import { traceOf, type Trace } from '../../lib/formats/recording';
import { alignRecordings, searchBestFitShift } from '../../lib/signal';
import { secondGrid } from '../../lib/signal/second-grid';
import { wearableOnRealHeart, type Preset } from '../../lib/simulate';
import { quantile } from './alignment-accuracy';

interface RealRecording {
	name: string;
	traces: Trace[];
	heartRate: Trace;
}

/** Every recording of a folder with heart rate over at least ten minutes; copies of one activity are left out. */
function realRecordings(folder: string): RealRecording[] {
	const found: RealRecording[] = [];
	for (const name of readdirSync(folder)) {
		if (!/\.(fit|tcx|gpx)$/.test(name)) continue;
		const reading = readFile(new Uint8Array(readFileSync(join(folder, name))), name);
		if (!reading.ok) continue;
		const heartRate = traceOf(reading.recording, 'heartRate');
		if (!heartRate || heartRate.tS.length < 100 || heartRate.tS[heartRate.tS.length - 1] - heartRate.tS[0] < 600) continue;
		if (found.some((f) => Math.abs(f.heartRate.tS[0] - heartRate.tS[0]) < 6 * 3600)) continue;
		found.push({ name, traces: reading.recording.traces, heartRate });
	}
	return found;
}

/** Gap-free pieces of this length of recordings that write every second. */
function pieces(recordings: RealRecording[], lengthS: number): Trace[] {
	const found: Trace[] = [];
	for (const { heartRate } of recordings) {
		const steps = heartRate.tS.slice(1).map((t, i) => t - heartRate.tS[i]);
		if (quantile([...steps], 0.5) > 1) continue;
		const grid = secondGrid(heartRate);
		for (let from = 0; from + lengthS <= grid.value.length; from += lengthS) {
			const value = grid.value.slice(from, from + lengthS);
			if (value.some((v) => Number.isNaN(v) || v < 40)) continue;
			found.push({ kind: 'heartRate', tS: Float64Array.from(value, (_, i) => grid.startS + from + i), value });
		}
	}
	return found;
}

function main(args: string[]): void {
	const option = (name: string, otherwise: number) => (args.includes(name) ? Number(args[args.indexOf(name) + 1]) : otherwise);
	const folder = args[0] && !args[0].startsWith('--') ? args[0] : '../shared/files';
	const recordings = realRecordings(folder);
	console.log(`${recordings.length} recordings: ${recordings.map((r) => r.name).join(', ')}`);

	let pairs = 0;
	for (const a of recordings)
		for (const b of recordings) {
			if (a === b) continue;
			pairs++;
			const { reliable, clock, bestFitShiftS } = alignRecordings(a, b);
			if (reliable || clock) console.log(`  WRONG: ${a.name} with ${b.name}: reliable ${reliable}, shift ${bestFitShiftS}, clock ${clock?.channel ?? 'unknown'}`);
		}
	console.log(`${pairs} pairs that do not belong together looked at`);

	const lengthS = option('--minutes', 30) * 60;
	const cut = pieces(recordings, lengthS);
	for (const preset of ['none', 'lag', 'typical', 'heavy'] satisfies Preset[]) {
		const errors: number[] = [];
		let accepted = 0;
		let wrongAccepted = 0;
		let covered = 0;
		cut.forEach((reference, piece) => {
			for (let k = 0; k < option('--wearables', 6); k++) {
				const { heartRate, truth } = wearableOnRealHeart({ seed: 9000 + 100 * piece + k, heartRate: reference, preset });
				const { estimate } = searchBestFitShift(reference, heartRate);
				const error = estimate.bestFitShiftS === null ? Infinity : Math.abs(estimate.bestFitShiftS - truth.totalShiftS);
				errors.push(error);
				if (estimate.reliable) accepted++;
				if (estimate.reliable && error > 5) wrongAccepted++;
				if (estimate.ci95 && estimate.ci95[0] <= truth.totalShiftS && truth.totalShiftS <= estimate.ci95[1]) covered++;
			}
		});
		const n = errors.length;
		console.log(
			`${preset.padEnd(8)} ${cut.length} pieces, n ${n}   p50 ${quantile(errors, 0.5).toFixed(2)}  p90 ${quantile(errors, 0.9).toFixed(2)}  p99 ${quantile(errors, 0.99).toFixed(2)} s   wrong ${errors.filter((e) => e > 5).length}   accepted ${((100 * accepted) / n).toFixed(1)} %, of these wrong ${wrongAccepted}   covered ${((100 * covered) / n).toFixed(1)} %`
		);
	}
}

main(process.argv.slice(2));
