/**
 * Real recordings against what independent readers found in them.
 *
 * The figures are copied from the table that comes with the files: span in minutes, heart-rate values in the records
 * (`n`), how many of them are 0, their range, the longest step between records and the number of steps above 10 s,
 * and repeated time stamps.
 */
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import FitParser from 'fit-file-parser';
import GpxParser from 'gpxparser';
import { describe, expect, it } from 'vitest';
import { readFile } from '.';
import { describeTrace } from './describe';
import { collectFit } from './fit/collect';
import { heartRateFromRr } from './heart-rate-from-rr';
import { traceOf } from './recording';

const FOLDER = join(process.cwd(), '../shared/files');

interface Row {
	minutes: number;
	n: number;
	min: number;
	max: number;
	gaps?: number;
	longestGapS?: number;
	duplicates?: number;
	/** The heart rate comes from stored beats too, so the counts of the records do not hold. */
	storedBeats?: boolean;
}

const READABLE: Record<string, Row> = {
	'fit-run-1hz-cadence.fit': { minutes: 47, n: 2808, min: 69, max: 178 },
	'fit-indoor-cycling-hrv.fit': { minutes: 18, n: 1072, min: 128, max: 185 },
	'fit-run-compressed-timestamps-5s.fit': { minutes: 65, n: 754, min: 93, max: 189, gaps: 1, longestGapS: 115 },
	'fit-indoor-trainer-no-gps.fit': { minutes: 38, n: 2263, min: 81, max: 176 },
	'fit-tiny-bigendian-devfields-no-timestamps.fit': { minutes: 0, n: 3, min: 140, max: 144 },
	'fit-run-devfields.fit': { minutes: 57, n: 3424, min: 94, max: 146 },
	'fit-swim-strap-stored-beats.fit': {
		minutes: 74,
		n: 0,
		min: 0,
		max: 0,
		gaps: 1,
		longestGapS: 70,
		duplicates: 2,
		storedBeats: true
	},
	'fit-unfinished-truncated-279min.fit': {
		minutes: 279,
		n: 14387,
		min: 84,
		max: 160,
		gaps: 6,
		longestGapS: 1107,
		duplicates: 8
	},
	'fit-chained-triathlon-strap.fit': { minutes: 158, n: 1430, min: 138, max: 187, storedBeats: true },
	'fit-triathlon-summary-first.fit': { minutes: 67, n: 3364, min: 72, max: 178 },
	'fit-triathlon-summary-last.fit': { minutes: 67, n: 3364, min: 72, max: 178 },
	'fit-ride-bigendian-rr-166min.fit': { minutes: 166, n: 9188, min: 80, max: 160, gaps: 3, longestGapS: 597 },
	'fit-strength-1hz.fit': { minutes: 24, n: 1415, min: 69, max: 110 },
	'fit-hiit-bigendian.fit': { minutes: 13, n: 779, min: 85, max: 118 },
	'fit-split-records-duplicate-timestamps.fit': { minutes: 50, n: 2984, min: 81, max: 175, duplicates: 924 },
	'fit-ride-241min-optical-dropouts.fit': { minutes: 241, n: 13251, min: 24, max: 179 },
	'fit-ride-212min-misaligned-field.fit': { minutes: 212, n: 8946, min: 80, max: 168, gaps: 5, longestGapS: 683 },
	'fit-ride-212min-gaps.fit': {
		minutes: 212,
		n: 10686,
		min: 115,
		max: 189,
		gaps: 26,
		longestGapS: 1019,
		duplicates: 15
	},
	'fit-ride-393min-bigendian-devfields.fit': { minutes: 393, n: 13402, min: 66, max: 170, gaps: 45, longestGapS: 2530 },
	'fit-indoor-rowing-devfields.fit': { minutes: 28, n: 1641, min: 80, max: 179 },
	'fit-ride-smart-recording.fit': { minutes: 113, n: 2088, min: 98, max: 183, gaps: 34, longestGapS: 47 },
	'tcx-xcski-irregular.tcx': { minutes: 40, n: 486, min: 83, max: 172, gaps: 51, longestGapS: 33 },
	'tcx-run-6s.tcx': { minutes: 33, n: 383, min: 60, max: 189 },
	'gpx-ride-hr.gpx': { minutes: 41, n: 931, min: 86, max: 171, gaps: 9, longestGapS: 172 }
};

const REFUSED: Record<string, string> = {
	'fit-truncated-eof.fit': 'no-heart-rate',
	'fit-bad-file-crc.fit': 'no-heart-rate',
	'fit-chained-second-crc-bad.fit': 'no-heart-rate',
	'fit-hr-all-zero.fit': 'no-heart-rate',
	'tcx-no-hr.tcx': 'no-heart-rate',
	'gpx-extension-mini.gpx': 'too-few-values'
};

function read(name: string) {
	return readFile(new Uint8Array(readFileSync(join(FOLDER, name))), name);
}

describe.skipIf(!existsSync(FOLDER))('real recordings (skipped where ../shared/files is absent)', () => {
	for (const [name, row] of Object.entries(READABLE))
		it(`${name}: count, range, span, gaps and repeats are what independent readers found`, () => {
			const reading = read(name);
			if (!reading.ok) throw new Error(reading.refusal.message);
			const { recording } = reading;
			const trace = traceOf(recording, 'heartRate');
			if (!trace) throw new Error('no heart rate');
			if (row.storedBeats) expect(recording.warnings.map((w) => w.code)).toContain('stored-beats');
			else expect(describeTrace(trace)).toMatchObject({ n: row.n, min: row.min, max: row.max });
			expect(Math.abs((recording.endS - recording.startS) / 60 - row.minutes)).toBeLessThanOrEqual(0.6);
			const gap = recording.warnings.find((w) => w.code === 'gap');
			if (row.gaps) {
				expect(gap?.message).toMatch(new RegExp(`^${row.gaps} gaps? `));
				expect(gap?.message).toContain(`longest is ${row.longestGapS} s`);
			} else expect(gap).toBeUndefined();
			const repeats = recording.warnings.find((w) => w.code === 'duplicate-time');
			if (row.duplicates) expect(repeats?.message).toMatch(new RegExp(`^${row.duplicates} records`));
			else expect(repeats).toBeUndefined();
			for (const { tS, value } of recording.traces) {
				expect(value.length).toBe(tS.length);
				for (let i = 1; i < tS.length; i++) if (!(tS[i] > tS[i - 1])) throw new Error(`time does not rise at ${i}`);
			}
		});

	for (const [name, code] of Object.entries(REFUSED))
		it(`${name} is refused as ${code}, with a sentence that says what it does hold`, () => {
			const reading = read(name);
			expect(reading.ok).toBe(false);
			if (!reading.ok) {
				expect(reading.refusal.code).toBe(code);
				expect(reading.refusal.message).toMatch(/was read: \d+/);
			}
		});

	it('the same triathlon with its summaries first or last gives the same traces', () => {
		const [first, last] = ['fit-triathlon-summary-first.fit', 'fit-triathlon-summary-last.fit'].map(read);
		if (!first.ok || !last.ok) throw new Error('refused');
		expect(first.recording.traces).toEqual(last.recording.traces);
	});

	it('the heart rate derived from RR intervals is that of the records, which show it 1 to 3 s late', () => {
		const reading = read('fit-indoor-cycling-hrv.fit');
		if (!reading.ok) throw new Error(reading.refusal.message);
		const beats = traceOf(reading.recording, 'rrInterval');
		const shown = traceOf(reading.recording, 'heartRate');
		if (!beats || !shown) throw new Error('channel missing');
		const derived = heartRateFromRr(beats.tS, beats.value);
		const bpmAt = new Map(derived.tS.map((t, i) => [t, derived.bpm[i]]));
		const meanErrors = [-3, -2, -1, 0, 1, 2, 3, 4, 5].map((lagS) => {
			const errors = [...shown.tS].flatMap((t, i) => {
				const bpm = bpmAt.get(t - lagS);
				return bpm === undefined ? [] : [Math.abs(bpm - shown.value[i])];
			});
			return { lagS, mean: errors.reduce((a, b) => a + b, 0) / errors.length };
		});
		const best = meanErrors.reduce((a, b) => (b.mean < a.mean ? b : a));
		expect(best.lagS).toBeGreaterThanOrEqual(1);
		expect(best.lagS).toBeLessThanOrEqual(3);
		expect(best.mean).toBeLessThan(1);
	});

	it('stored beats agree with the heart rate that the records of the same moments show', () => {
		const collected = collectFit(new Uint8Array(readFileSync(join(FOLDER, 'fit-chained-triathlon-strap.fit'))));
		const bpm = collected.table.column('heartRate');
		if (!bpm) throw new Error('no heart rate');
		const errors: number[] = [];
		for (let row = 0; row < collected.table.n; row++) {
			const k = collected.stored.tS.findIndex((t) => t >= collected.table.tS[row]);
			if (bpm[row] > 0 && k > 0) errors.push(Math.abs(collected.stored.bpm[k] - bpm[row]));
		}
		expect(errors.length).toBeGreaterThan(100);
		expect(errors.reduce((a, b) => a + b, 0) / errors.length).toBeLessThan(0.5);
	});

	// The package reads neither stored beats nor unfinished files; on these it and ours must agree record by record.
	for (const name of [
		'fit-run-1hz-cadence.fit',
		'fit-indoor-trainer-no-gps.fit',
		'fit-triathlon-summary-first.fit',
		'fit-hiit-bigendian.fit',
		'fit-ride-241min-optical-dropouts.fit',
		'fit-ride-smart-recording.fit'
	])
		it(`${name}: fit-file-parser finds the same heart rate at the same times`, async () => {
			const bytes = readFileSync(join(FOLDER, name));
			const other = await new FitParser({ force: true, mode: 'list' }).parseAsync(bytes as Buffer<ArrayBuffer>);
			const rows = (other.records ?? []).filter((row) => (row.heart_rate ?? 0) > 0);
			const reading = readFile(new Uint8Array(bytes), name);
			if (!reading.ok) throw new Error(reading.refusal.message);
			const trace = traceOf(reading.recording, 'heartRate');
			expect([...(trace?.value ?? [])]).toEqual(rows.map((row) => row.heart_rate));
			expect([...(trace?.tS ?? [])]).toEqual(
				rows.map((row) => new Date(row.timestamp as unknown as string).getTime() / 1000)
			);
		});

	it('gpx-ride-hr.gpx: gpxparser finds as many points at the same times', () => {
		const parser = new GpxParser();
		parser.parse(readFileSync(join(FOLDER, 'gpx-ride-hr.gpx'), 'utf8'));
		const reading = read('gpx-ride-hr.gpx');
		if (!reading.ok) throw new Error(reading.refusal.message);
		const points = parser.tracks.flatMap((track: { points: { time: Date; ele: number }[] }) => track.points);
		const trace = traceOf(reading.recording, 'altitude');
		expect([...(trace?.tS ?? [])]).toEqual(points.map((point: { time: Date }) => point.time.getTime() / 1000));
		expect([...(trace?.value ?? [])]).toEqual(points.map((point: { ele: number }) => point.ele));
	});
});
