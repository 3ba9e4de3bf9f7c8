import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readFile } from '..';
import { traceOf, type Reading, type Recording } from '../recording';
import { writeFit, type RecordingToWrite } from '.';

const DEVICE = { maker: null, product: 'Halden ECG strap', serial: '40217', firmware: '4.12' };
const START_S = 1_715_000_000;

function recordingOf(reading: Reading): Recording {
	if (!reading.ok) throw new Error(reading.refusal.message);
	return reading.recording;
}

function trace(kind: 'heartRate' | 'cadence' | 'speed', values: number[]) {
	return { kind, tS: Float64Array.from(values, (_, i) => START_S + i), value: Float64Array.from(values) };
}

describe('writeFit', () => {
	it('gives back heart rate and cadence on foot as written, whatever the byte order', () => {
		fc.assert(
			fc.property(
				fc.array(fc.tuple(fc.integer({ min: 1, max: 254 }), fc.integer({ min: 140, max: 220 })), {
					minLength: 2,
					maxLength: 200
				}),
				fc.boolean(),
				(values, bigEndian) => {
					const written: RecordingToWrite = {
						device: DEVICE,
						activity: 'running',
						traces: [
							trace(
								'heartRate',
								values.map((v) => v[0])
							),
							trace(
								'cadence',
								values.map((v) => v[1])
							)
						]
					};
					const recording = recordingOf(readFile(writeFit(written, { bigEndian }), 'a.fit'));
					expect([...(traceOf(recording, 'heartRate')?.value ?? [])]).toEqual(values.map((v) => v[0]));
					expect([...(traceOf(recording, 'cadence')?.value ?? [])]).toEqual(values.map((v) => v[1]));
					expect(recording.startS).toBe(START_S);
					expect(recording.device).toEqual({
						maker: 'maker 255',
						product: 'Halden ECG strap',
						serial: '40217',
						firmware: '4.12'
					});
					expect(recording.warnings.map((w) => w.code).filter((code) => code !== 'implausible-heart-rate')).toEqual([
						'cadence-doubled'
					]);
				}
			),
			{ numRuns: 40 }
		);
	});

	it('puts RR intervals back within a second of their beats, and exactly spaced', () => {
		const rr = Array.from({ length: 400 }, (_, i) => 700 + Math.round(150 * Math.sin(i / 9)));
		let t = START_S;
		const beats = rr.map((ms) => (t += ms / 1000));
		const written: RecordingToWrite = {
			device: DEVICE,
			activity: 'cycling',
			traces: [
				trace(
					'heartRate',
					Array.from({ length: Math.ceil(t - START_S) }, () => 80)
				),
				{ kind: 'rrInterval', tS: Float64Array.from(beats), value: Float64Array.from(rr) }
			]
		};
		const read = traceOf(recordingOf(readFile(writeFit(written), 'a.fit')), 'rrInterval');
		expect([...(read?.value ?? [])]).toEqual(rr);
		const errors = [...(read?.tS ?? [])].map((tS, i) => tS - beats[i]);
		expect(Math.max(...errors.map(Math.abs))).toBeLessThan(1);
		// From beat to beat the spacing is right to a tenth of a second; only the whole may sit up to 1 s off.
		const sorted = [...errors].sort((a, b) => a - b);
		expect(sorted[sorted.length - 1] - sorted[0]).toBeLessThan(0.35);
	});

	it('refuses a serial number that the format cannot hold instead of dropping it', () => {
		expect(() =>
			writeFit({ device: { ...DEVICE, serial: 'A-17' }, activity: null, traces: [trace('heartRate', [80, 81])] })
		).toThrow(/whole numbers/);
	});

	it('leaves a file that no device ever closed readable, and says so', () => {
		const bytes = writeFit(
			{ device: DEVICE, activity: null, traces: [trace('heartRate', [80, 81, 82])] },
			{ finished: false }
		);
		const recording = recordingOf(readFile(bytes, 'a.fit'));
		expect(traceOf(recording, 'heartRate')?.value.length).toBe(3);
		expect(recording.warnings.map((w) => w.code)).toContain('unfinished');
	});
});
