/** How fast files are decoded, against the package's own parser, on generated recordings. */
import FitParser from 'fit-file-parser';
import { readFile } from '../../lib/formats';
import { writeFit, type RecordingToWrite } from '../../lib/formats/write';
import type { BenchRow } from './row';

const FOUR_HOURS_S = 14_400;
const RUNS = 7;

/** A ride of four hours with the channels that devices write once a second. */
function fourHourRide(): RecordingToWrite {
	const tS = Float64Array.from({ length: FOUR_HOURS_S }, (_, i) => 1_715_000_000 + i);
	const wave = (low: number, high: number, periodS: number) =>
		Float64Array.from(tS, (_, i) => low + (high - low) * (0.5 + 0.5 * Math.sin(i / periodS)));
	const rounded = (values: Float64Array) => values.map(Math.round);
	return {
		device: { maker: null, product: 'Wrenna Loop 2', serial: '5531', firmware: '2.04' },
		activity: 'cycling',
		traces: [
			{ kind: 'heartRate', tS, value: rounded(wave(95, 172, 400)) },
			{ kind: 'cadence', tS, value: rounded(wave(70, 100, 60)) },
			{ kind: 'speed', tS, value: wave(4, 12, 200) },
			{ kind: 'power', tS, value: rounded(wave(80, 320, 90)) },
			{ kind: 'altitude', tS, value: wave(100, 600, 3000) },
			{ kind: 'distance', tS, value: Float64Array.from(tS, (_, i) => 8 * i) },
			{ kind: 'temperature', tS, value: rounded(wave(12, 24, 5000)) }
		]
	};
}

function median(values: number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	return sorted[sorted.length >> 1];
}

/**
 * Decodes a generated four-hour FIT file with our reader and with fit-file-parser, in turns.
 *
 * @returns one row; both readers are checked to have found all heart-rate values
 */
export async function benchImport(): Promise<BenchRow[]> {
	const bytes = writeFit(fourHourRide());
	const ours: number[] = [];
	const rival: number[] = [];
	for (let run = 0; run < RUNS + 1; run++) {
		let begin = performance.now();
		const reading = readFile(bytes, 'ride.fit');
		const oursMs = performance.now() - begin;
		begin = performance.now();
		const parsed = await new FitParser({ force: true, mode: 'list' }).parseAsync(
			Buffer.from(bytes) as Buffer<ArrayBuffer>
		);
		const rivalMs = performance.now() - begin;
		const found = reading.ok ? reading.recording.traces.find((trace) => trace.kind === 'heartRate')?.tS.length : 0;
		const theirs = parsed.records?.filter((record) => (record.heart_rate ?? 0) > 0).length;
		if (found !== FOUR_HOURS_S || theirs !== FOUR_HOURS_S)
			throw new Error(`A reader lost values: ours found ${found}, the rival ${theirs} of ${FOUR_HOURS_S}.`);
		// The first turn warms both up and is not counted.
		if (run === 0) continue;
		ours.push(oursMs);
		rival.push(rivalMs);
	}
	return [
		{
			name: `decode a 4 h FIT file (${Math.round(bytes.length / 1000)} kB, 7 channels)`,
			ours_ms: median(ours),
			rival: 'fit-file-parser 6.1.2 alone',
			rival_ms: median(rival),
			ratio: median(ours) / median(rival)
		}
	];
}
