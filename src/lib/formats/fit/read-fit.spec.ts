import FitParser from 'fit-file-parser';
import { describe, expect, it } from 'vitest';
import { traceOf, type Reading, type Recording } from '../recording';
import { BYTE, ENUM, FitBytes, STRING, UINT16, UINT32, UINT8, type FieldToWrite } from '../write/fit-bytes';
import { writeFit, type RecordingToWrite } from '../write';
import { FIT_EPOCH_S } from './collect';
import { readFit } from './read-fit';

const START = 1_000_000_000;
const START_S = START + FIT_EPOCH_S;
const HR_RECORD: FieldToWrite[] = [
	[253, UINT32],
	[3, UINT8]
];

function recordingOf(reading: Reading): Recording {
	if (!reading.ok) throw new Error(`${reading.refusal.code}: ${reading.refusal.message}`);
	return reading.recording;
}

const codes = (recording: Recording) => recording.warnings.map((warning) => warning.code);
const values = (recording: Recording, kind: 'heartRate' | 'cadence' | 'speed' | 'rrInterval') => [
	...(traceOf(recording, kind)?.value ?? [])
];
const times = (recording: Recording, kind: 'heartRate' | 'rrInterval' = 'heartRate') => [
	...(traceOf(recording, kind)?.tS ?? [])
];

/** Records of one definition, each a time and a heart rate. */
function records(out: FitBytes, rows: [number, number][], local = 0): void {
	for (const [seconds, bpm] of rows) {
		out.put(local, UINT8);
		out.put(START + seconds, UINT32);
		out.put(bpm, UINT8);
	}
}

function simple(rows: [number, number][], finished = true): Uint8Array {
	const out = new FitBytes(true);
	out.define(0, 20, HR_RECORD);
	records(out, rows);
	return out.finish(finished);
}

const THIRTY: [number, number][] = Array.from({ length: 30 }, (_, i) => [i, 100 + i]);

function joined(...parts: Uint8Array[]): Uint8Array {
	const out = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
	let at = 0;
	for (const part of parts) {
		out.set(part, at);
		at += part.length;
	}
	return out;
}

describe('structure of damaged and unusual files', () => {
	it('keeps the published epoch: FIT second 0 is 1989-12-31 00:00 UTC', () => {
		expect(new Date(FIT_EPOCH_S * 1000).toISOString()).toBe('1989-12-31T00:00:00.000Z');
		expect(times(recordingOf(readFit(simple(THIRTY))))[0]).toBe(START_S);
	});

	it('reads a file with a wrong check sum and says that it was changed', () => {
		const bytes = simple(THIRTY);
		bytes[bytes.length - 1] ^= 0xff;
		const recording = recordingOf(readFit(bytes));
		expect(values(recording, 'heartRate')).toHaveLength(30);
		expect(codes(recording)).toEqual(['wrong-crc']);
	});

	it('takes a header check sum of 0 as legal and a wrong one as damage', () => {
		const legal = simple(THIRTY);
		legal[12] = legal[13] = 0;
		// The check sum of the file covers the header, so it changes too; only the header's own is looked at here.
		expect(codes(recordingOf(readFit(legal)))).not.toContain('wrong-header-crc');
		const wrong = simple(THIRTY);
		wrong[12] ^= 0x55;
		expect(codes(recordingOf(readFit(wrong)))).toContain('wrong-header-crc');
	});

	it('reads what a cut file still holds, down to the last whole record', () => {
		const bytes = simple(THIRTY).subarray(0, -10);
		const recording = recordingOf(readFit(bytes));
		expect(values(recording, 'heartRate')).toHaveLength(28);
		expect(codes(recording)).toEqual(['missing-tail', 'message-cut']);
	});

	it('reads a file whose device never wrote the data size, with and without a check sum behind it', () => {
		const bare = recordingOf(readFit(simple(THIRTY, false)));
		expect(values(bare, 'heartRate')).toHaveLength(30);
		expect(codes(bare)).toEqual(['unfinished']);
	});

	it('goes on behind a data size that was never brought up to date', () => {
		const bytes = simple(THIRTY);
		new DataView(bytes.buffer).setUint32(4, 12 + 6 * 10, true);
		const recording = recordingOf(readFit(bytes));
		expect(values(recording, 'heartRate')).toEqual(THIRTY.map((row) => row[1]));
		expect(codes(recording)).toContain('stale-size');
	});

	it('passes over damaged bytes in the middle and finds the next records', () => {
		const out = new FitBytes(true);
		out.define(0, 20, HR_RECORD);
		records(out, THIRTY.slice(0, 10));
		for (let i = 0; i < 23; i++) out.put(0x0b, UINT8);
		records(out, THIRTY.slice(10));
		const recording = recordingOf(readFit(out.finish()));
		expect(values(recording, 'heartRate')).toEqual(THIRTY.map((row) => row[1]));
		expect(codes(recording)).toContain('damaged-bytes');
	});

	it('reads all parts of a chained file, also when the second is damaged', () => {
		const second = simple(THIRTY.map(([t, bpm]) => [t + 30, bpm]));
		second[second.length - 1] ^= 1;
		const recording = recordingOf(readFit(joined(simple(THIRTY), second)));
		expect(values(recording, 'heartRate')).toHaveLength(60);
		expect(codes(recording)).toEqual(['wrong-crc', 'chained-parts']);
	});

	it('never throws on a header with nothing behind it', () => {
		const bytes = simple(THIRTY).subarray(0, 14);
		const reading = readFit(bytes);
		expect(reading.ok).toBe(false);
		if (!reading.ok) expect(reading.refusal.code).toBe('no-heart-rate');
	});
});

describe('records', () => {
	it('counts compressed time stamps on over the roll-over at 32 s', () => {
		const out = new FitBytes(true);
		out.define(0, 20, HR_RECORD);
		out.define(1, 20, [[3, UINT8]]);
		records(out, [[0, 100]]);
		for (let i = 1; i <= 20; i++) {
			out.put(0x80 | (1 << 5) | ((START + 5 * i) & 0x1f), UINT8);
			out.put(100 + i, UINT8);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(times(recording)).toEqual(Array.from({ length: 21 }, (_, i) => START_S + 5 * i));
	});

	it('merges position and heart rate that stand in two records of one second', () => {
		const out = new FitBytes(true);
		out.define(0, 20, HR_RECORD);
		out.define(1, 20, [
			[253, UINT32],
			[6, UINT16]
		]);
		for (let i = 0; i < 5; i++) {
			records(out, [[i, 120 + i]]);
			out.put(1, UINT8);
			out.put(START + i, UINT32);
			out.put(2500, UINT16);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(values(recording, 'heartRate')).toEqual([120, 121, 122, 123, 124]);
		expect(values(recording, 'speed')).toEqual([2.5, 2.5, 2.5, 2.5, 2.5]);
		expect(recording.warnings.map((w) => w.message)[0]).toMatch(/^5 records share a time stamp/);
	});

	it('reads what stands around a field whose size is no multiple of its type', () => {
		const out = new FitBytes(true);
		out.define(0, 20, [
			[253, UINT32],
			[6, UINT16, 3],
			[3, UINT8]
		]);
		for (let i = 0; i < 5; i++) {
			out.put(0, UINT8);
			out.put(START + i, UINT32);
			for (let k = 0; k < 3; k++) out.put(9, UINT8);
			out.put(90 + i, UINT8);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(values(recording, 'heartRate')).toEqual([90, 91, 92, 93, 94]);
		expect(traceOf(recording, 'speed')).toBeUndefined();
		expect(codes(recording)).toEqual(['odd-field-size']);
	});

	it('tells zeros from empty fields and counts neither', () => {
		const recording = recordingOf(
			readFit(
				simple([
					[0, 0],
					[1, 255],
					[2, 80],
					[3, 81],
					[4, 0]
				])
			)
		);
		expect(values(recording, 'heartRate')).toEqual([80, 81]);
		const told = recording.warnings.map((w) => `${w.code}: ${w.message}`);
		expect(told[0]).toMatch(/^heart-rate-zero: 2 heart-rate values of 0/);
		expect(told[1]).toMatch(/^heart-rate-missing: 3 of 5 time stamps/);
	});

	it('refuses a heart rate that is 0 throughout and says how many zeros there were', () => {
		const reading = readFit(simple(THIRTY.map(([t]) => [t, 0])));
		expect(reading.ok).toBe(false);
		if (!reading.ok) expect(reading.refusal.message).toContain('0 in all 30 values');
	});

	it('keeps 24 and 231 bpm as the file has them, and says so', () => {
		const recording = recordingOf(
			readFit(
				simple([
					[0, 24],
					[1, 231],
					[2, 80]
				])
			)
		);
		expect(values(recording, 'heartRate')).toEqual([24, 231, 80]);
		expect(codes(recording)).toEqual(['implausible-heart-rate', 'implausible-heart-rate']);
	});

	it('puts records in order where the clock steps back, changes no time, and says so', () => {
		const recording = recordingOf(
			readFit(
				simple([
					[0, 80],
					[1, 81],
					[5, 85],
					[2, 82],
					[3, 83]
				])
			)
		);
		expect(times(recording).map((t) => t - START_S)).toEqual([0, 1, 2, 3, 5]);
		expect(codes(recording)).toEqual(['backward-step']);
	});

	it('keeps a jump of 27 days as it is and tells it as a gap and as a jump', () => {
		const recording = recordingOf(
			readFit(
				simple([
					[0, 80],
					[1, 81],
					[27 * 86_400, 82],
					[27 * 86_400 + 1, 83]
				])
			)
		);
		expect(codes(recording)).toEqual(['gap', 'clock-jump']);
		expect(recording.warnings[1].message).toContain('27 days');
	});

	it('takes the heart rate from a developer field where the records have none', () => {
		const recording = recordingOf(readFit(withDeveloperField(255)));
		expect(values(recording, 'heartRate')).toEqual([150, 151, 152]);
		expect(codes(recording)).toContain('developer-field');
	});

	it('keeps two heart rates apart: the plain one is used, the other can be asked for', () => {
		const bytes = withDeveloperField(70);
		const plain = recordingOf(readFit(bytes));
		expect(values(plain, 'heartRate')).toEqual([70, 70, 70]);
		expect(codes(plain)).toContain('second-heart-rate-source');
		expect(plain.heartRateSources?.map((source) => source.key)).toEqual(['record', 'developer:heartRate:Heart Rate']);
		const other = recordingOf(readFit(bytes, { heartRateSource: 'developer:heartRate:Heart Rate' }));
		expect(values(other, 'heartRate')).toEqual([150, 151, 152]);
	});
});

function withDeveloperField(plainBpm: number): Uint8Array {
	const out = new FitBytes(true);
	out.define(0, 206, [
		[0, UINT8],
		[1, UINT8],
		[2, UINT8],
		[3, STRING, 16]
	]);
	out.put(0, UINT8);
	out.put(0, UINT8);
	out.put(7, UINT8);
	out.put(UINT8, UINT8);
	out.text('Heart Rate', 16);
	out.define(1, 20, HR_RECORD, [[7, 1, 0]]);
	for (let i = 0; i < 3; i++) {
		out.put(1, UINT8);
		out.put(START + i, UINT32);
		out.put(plainBpm, UINT8);
		out.put(150 + i, UINT8);
	}
	return out.finish();
}

describe('beats', () => {
	it('unpacks 12-bit counters of stored beats and puts them on the clock of the first message', () => {
		const out = new FitBytes(true);
		out.define(0, 20, [
			[253, UINT32],
			[6, UINT16]
		]);
		for (let i = 0; i < 8; i++) {
			out.put(0, UINT8);
			out.put(START + i, UINT32);
			out.put(1000, UINT16);
		}
		const first = 5000;
		const counters = Array.from({ length: 8 }, (_, i) => first + 768 * (i + 1));
		out.define(1, 132, [
			[253, UINT32],
			[9, UINT32],
			[6, UINT8]
		]);
		out.put(1, UINT8);
		out.put(START, UINT32);
		out.put(first, UINT32);
		out.put(79, UINT8);
		out.define(2, 132, [
			[6, UINT8, 8],
			[10, BYTE, 12]
		]);
		out.put(2, UINT8);
		for (let i = 0; i < 8; i++) out.put(80 + i, UINT8);
		for (let i = 0; i < 8; i += 2) {
			const [a, b] = [counters[i] & 0xfff, counters[i + 1] & 0xfff];
			out.put(a & 0xff, BYTE);
			out.put((a >> 8) | ((b & 0xf) << 4), BYTE);
			out.put(b >> 4, BYTE);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(values(recording, 'heartRate')).toEqual([79, 80, 81, 82, 83, 84, 85, 86, 87]);
		expect(times(recording)).toEqual(Array.from({ length: 9 }, (_, i) => START_S + 0.75 * i));
		expect(values(recording, 'rrInterval')).toEqual(Array.from({ length: 8 }, () => 750));
		expect(codes(recording)).toContain('stored-beats');
	});

	it('tells sampled RR values from a list of beats: their sum is not the span', () => {
		const out = new FitBytes(true);
		out.define(0, 20, [
			[253, UINT32],
			[6, UINT16]
		]);
		out.define(1, 78, [[0, UINT16]]);
		for (let i = 0; i < 120; i++) {
			out.put(0, UINT8);
			out.put(START + i, UINT32);
			out.put(1000, UINT16);
			out.put(1, UINT8);
			out.put(600, UINT16);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(codes(recording)).toContain('rr-sampled');
		expect(new Set(values(recording, 'heartRate'))).toEqual(new Set([100]));
		expect(times(recording, 'rrInterval')).toHaveLength(120);
	});

	it('reads the heart rate of an all-day recording with its 16-bit times', () => {
		const out = new FitBytes(true);
		out.define(0, 55, [[253, UINT32]]);
		out.put(0, UINT8);
		out.put(START, UINT32);
		out.define(1, 55, [
			[26, UINT16],
			[27, UINT8]
		]);
		for (let i = 1; i <= 3; i++) {
			out.put(1, UINT8);
			out.put((START + 60 * i) & 0xffff, UINT16);
			out.put(60 + i, UINT8);
		}
		const recording = recordingOf(readFit(out.finish()));
		expect(times(recording).map((t) => t - START_S)).toEqual([60, 120, 180]);
		expect(values(recording, 'heartRate')).toEqual([61, 62, 63]);
	});
});

describe('cadence', () => {
	function run(cadence: number, sport: number): Recording {
		const out = new FitBytes(true);
		out.define(0, 20, [
			[253, UINT32],
			[3, UINT8],
			[4, UINT8]
		]);
		for (let i = 0; i < 5; i++) {
			out.put(0, UINT8);
			out.put(START + i, UINT32);
			out.put(120, UINT8);
			out.put(cadence, UINT8);
		}
		out.define(1, 18, [
			[253, UINT32],
			[2, UINT32],
			[5, ENUM]
		]);
		out.put(1, UINT8);
		out.put(START + 4, UINT32);
		out.put(START, UINT32);
		out.put(sport, ENUM);
		return recordingOf(readFit(out.finish()));
	}

	it('doubles strides of a run and says so', () => {
		expect(values(run(84, 1), 'cadence')[0]).toBe(168);
		expect(codes(run(84, 1))).toEqual(['cadence-doubled']);
	});

	it('leaves a run alone that already counts steps', () => {
		expect(values(run(168, 1), 'cadence')[0]).toBe(168);
		expect(codes(run(168, 1))).toEqual(['cadence-in-steps']);
	});

	it('does not touch crank turns', () => {
		expect(values(run(84, 2), 'cadence')[0]).toBe(84);
		expect(codes(run(84, 2))).toEqual([]);
	});

	it('leaves out a cadence that is 0 throughout', () => {
		expect(traceOf(run(0, 2), 'cadence')).toBeUndefined();
		expect(codes(run(0, 2))).toEqual(['channel-all-zero']);
	});
});

describe('a second, independent reader', () => {
	it('finds the same heart rate, cadence, speed and times in what we write', async () => {
		const n = 600;
		const tS = Float64Array.from({ length: n }, (_, i) => START_S + i);
		const make = (f: (i: number) => number) => Float64Array.from({ length: n }, (_, i) => f(i));
		const written: RecordingToWrite = {
			device: { maker: null, product: 'Ostrel Band', serial: '77', firmware: '1.05' },
			activity: 'cycling',
			traces: [
				{ kind: 'heartRate', tS, value: make((i) => 100 + (i % 60)) },
				{ kind: 'cadence', tS, value: make((i) => 70 + (i % 20)) },
				{ kind: 'speed', tS, value: make((i) => 5 + (i % 10) / 10) },
				{ kind: 'altitude', tS, value: make((i) => 200 + (i % 5)) }
			]
		};
		const bytes = writeFit(written);
		const other = await new FitParser({ force: false, mode: 'list', speedUnit: 'm/s', lengthUnit: 'm' }).parseAsync(
			Buffer.from(bytes) as Buffer<ArrayBuffer>
		);
		const rows = other.records ?? [];
		expect(rows.map((row) => row.heart_rate)).toEqual([...written.traces[0].value]);
		expect(rows.map((row) => row.cadence)).toEqual([...written.traces[1].value]);
		expect(rows.map((row) => new Date(row.timestamp as unknown as string).getTime() / 1000)).toEqual([...tS]);
		const ours = recordingOf(readFit(bytes));
		expect(values(ours, 'heartRate')).toEqual([...written.traces[0].value]);
		expect(ours.warnings).toEqual([]);
	});
});
