import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readFile } from '..';
import { traceOf, type Reading, type Recording } from '../recording';
import { writeGpx, writeTcx, type RecordingToWrite } from '../write';

const START_S = 1_715_000_000;
const iso = (i: number) => new Date((START_S + i) * 1000).toISOString();
const open = (text: string, name = 'a.xml'): Reading => readFile(new TextEncoder().encode(text), name);

function read(text: string, name?: string): Recording {
	const reading = open(text, name);
	if (!reading.ok) throw new Error(`${reading.refusal.code}: ${reading.refusal.message}`);
	return reading.recording;
}

const codes = (recording: Recording) => recording.warnings.map((warning) => warning.code);
const heartRates = (recording: Recording) => [...(traceOf(recording, 'heartRate')?.value ?? [])];

const gpx = (points: string, head = '<gpx version="1.1" creator="Wrenna Loop 2">', type = '') =>
	`<?xml version="1.0"?>${head}<trk>${type}<trkseg>${points}</trkseg></trk></gpx>`;
const point = (i: number, extension: string, time = iso(i)) =>
	`<trkpt lat="51.2" lon="7.1"><ele>100</ele><time>${time}</time><extensions>${extension}</extensions></trkpt>`;
const five = (extension: (i: number) => string) => Array.from({ length: 5 }, (_, i) => point(i, extension(i))).join('');
const tcx = (points: string, sport = 'Biking', tail = '') =>
	`<TrainingCenterDatabase><Activities><Activity Sport="${sport}"><Id>${iso(0)}</Id><Lap StartTime="${iso(0)}"><Track>${points}</Track></Lap>${tail}</Activity></Activities></TrainingCenterDatabase>`;
const trackpoint = (i: number, more: string) => `<Trackpoint><Time>${iso(i)}</Time>${more}</Trackpoint>`;

describe('GPX as exporters write it', () => {
	it.each([
		[
			'the usual extension',
			(i: number) => `<gpxtpx:TrackPointExtension><gpxtpx:hr>${90 + i}</gpxtpx:hr></gpxtpx:TrackPointExtension>`
		],
		['a prefix that was never declared', (i: number) => `<ns7:TPE><ns7:hr>${90 + i}</ns7:hr></ns7:TPE>`],
		['no prefix', (i: number) => `<heartrate>${90 + i}</heartrate>`],
		['a value inside', (i: number) => `<HeartRateBpm><Value>${90 + i}</Value></HeartRateBpm>`],
		['twice, in two namespaces', (i: number) => `<a:hr>${90 + i}</a:hr><b:heartRate>${90 + i}</b:heartRate>`],
		['in CDATA', (i: number) => `<hr><![CDATA[${90 + i}]]></hr>`]
	])('finds the heart rate with %s', (_, extension) => {
		const recording = read(gpx(five(extension)));
		expect(recording.format).toBe('gpx');
		expect(heartRates(recording)).toEqual([90, 91, 92, 93, 94]);
		expect(codes(recording)).toEqual([]);
		expect(recording.device.product).toBe('Wrenna Loop 2');
	});

	it('keeps no position', () => {
		const recording = read(gpx(five((i) => `<hr>${90 + i}</hr>`)));
		expect(recording.traces.map((trace) => trace.kind)).toEqual(['heartRate', 'altitude']);
		expect(JSON.stringify(recording)).not.toContain('51.2');
	});

	it('doubles the cadence of a run, leaves that of a ride, and says that an unnamed activity is unclear', () => {
		const body = five((i) => `<hr>${90 + i}</hr><cad>84</cad>`);
		const cadence = (type: string) => traceOf(read(gpx(body, undefined, type)), 'cadence')?.value[0];
		expect(cadence('<type>running</type>')).toBe(168);
		expect(cadence('<type>9</type>')).toBe(168);
		expect(cadence('<type>cycling</type>')).toBe(84);
		expect(cadence('')).toBe(84);
		expect(codes(read(gpx(body)))).toContain('cadence-unit-unknown');
	});

	it('reads blanks before the declaration, a plain document type and times without a zone', () => {
		const body = Array.from({ length: 3 }, (_, i) => point(i, `<hr>${90 + i}</hr>`, iso(i).slice(0, 19))).join('');
		const recording = read('\n  ' + gpx(body).replace('<gpx', '<!DOCTYPE gpx SYSTEM "gpx.dtd"><gpx'));
		expect(heartRates(recording)).toEqual([90, 91, 92]);
		expect(codes(recording)).toContain('doctype-ignored');
		expect(codes(recording)).toContain('no-time-zone');
	});

	it('reads what stands before a cut, but no half-written value', () => {
		const whole = gpx(five((i) => `<hr>${90 + i}</hr>`));
		const cut = whole.slice(0, whole.indexOf('94</hr>') + 1);
		const recording = read(cut);
		expect(heartRates(recording)).toEqual([90, 91, 92, 93]);
		expect(codes(recording)[0]).toBe('missing-tail');
	});

	it('reads on behind a bare ampersand and tells the line', () => {
		const recording = read(gpx(five((i) => `<hr>${90 + i}</hr>`)).replace('<trk>', '<trk><name>Hill & dale</name>'));
		expect(heartRates(recording)).toHaveLength(5);
		expect(recording.warnings[0]).toMatchObject({ code: 'xml-errors', at: { line: 1 } });
	});

	it('takes way points where there is no track, and says so', () => {
		const recording = read(
			`<gpx>${[0, 1, 2].map((i) => `<wpt lat="1" lon="1"><time>${iso(i)}</time><extensions><hr>${90 + i}</hr></extensions></wpt>`).join('')}</gpx>`
		);
		expect(heartRates(recording)).toEqual([90, 91, 92]);
		expect(codes(recording)).toContain('points-not-in-track');
	});

	it('counts 3 of 5 steps back where the points are not in order', () => {
		const order = [4, 3, 2, 0, 1];
		const recording = read(gpx(order.map((i) => point(i, `<hr>${90 + i}</hr>`)).join('')));
		expect(heartRates(recording)).toEqual([90, 91, 92, 93, 94]);
		expect(recording.warnings[0].message).toMatch(/steps back 3 times/);
	});
});

describe('TCX as exporters write it', () => {
	it('reads heart rate, speed, power and the device with its firmware', () => {
		const creator =
			'<Creator><Name>Ostrel Band</Name><UnitId>3917</UnitId><ProductID>9</ProductID><Version><VersionMajor>4</VersionMajor><VersionMinor>10</VersionMinor></Version></Creator>';
		const recording = read(
			tcx(
				[0, 1, 2]
					.map((i) =>
						trackpoint(
							i,
							`<HeartRateBpm><Value>${90 + i}</Value></HeartRateBpm><Cadence>80</Cadence><Extensions><ns3:TPX><ns3:Speed>5.5</ns3:Speed><ns3:Watts>210</ns3:Watts></ns3:TPX></Extensions>`
						)
					)
					.join(''),
				'Biking',
				creator
			)
		);
		expect(recording.device).toEqual({ maker: null, product: 'Ostrel Band', serial: '3917', firmware: '4.10' });
		expect(recording.traces.map((trace) => [trace.kind, trace.value[0]])).toEqual([
			['heartRate', 90],
			['cadence', 80],
			['speed', 5.5],
			['power', 210]
		]);
		expect(codes(recording)).toEqual([]);
	});

	it('doubles the cadence that stands in the element for strides, and one in the plain element of a run', () => {
		const strides = read(
			tcx(
				[0, 1]
					.map((i) =>
						trackpoint(
							i,
							'<HeartRateBpm><Value>120</Value></HeartRateBpm><Extensions><TPX><RunCadence>84</RunCadence></TPX></Extensions>'
						)
					)
					.join(''),
				'Other'
			)
		);
		expect(traceOf(strides, 'cadence')?.value[0]).toBe(168);
		expect(codes(strides)).toEqual(['cadence-doubled']);
		const plain = read(
			tcx(
				[0, 1]
					.map((i) => trackpoint(i, '<HeartRateBpm><Value>120</Value></HeartRateBpm><Cadence>84</Cadence>'))
					.join(''),
				'Running'
			)
		);
		expect(traceOf(plain, 'cadence')?.value[0]).toBe(168);
	});

	it('reads activities that are listed newest first as one recording in order of time', () => {
		const two = tcx(
			[10, 11].map((i) => trackpoint(i, `<HeartRateBpm><Value>${90 + i}</Value></HeartRateBpm>`)).join('')
		).replace(
			'</Activities>',
			`<Activity Sport="Biking"><Lap><Track>${[0, 1].map((i) => trackpoint(i, `<HeartRateBpm><Value>${90 + i}</Value></HeartRateBpm>`)).join('')}</Track></Lap></Activity></Activities>`
		);
		const recording = read(two);
		expect(heartRates(recording)).toEqual([90, 91, 100, 101]);
		expect(codes(recording)).toEqual(['several-activities', 'backward-step']);
	});
});

describe('XML that means harm or is something else', () => {
	it('refuses declared entities in a sentence, at once', () => {
		const bomb = `<?xml version="1.0"?><!DOCTYPE gpx [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">]><gpx><trk><trkseg>${point(0, '<hr>&b;</hr>')}</trkseg></trk></gpx>`;
		const reading = open(bomb);
		expect(reading).toMatchObject({ ok: false, refusal: { code: 'xml-entities' } });
	});

	it('refuses a hundred thousand nested elements without running out of stack', () => {
		expect(open(`<gpx>${'<a>'.repeat(100_000)}`)).toMatchObject({ ok: false, refusal: { code: 'xml-too-deep' } });
	});

	it('says what an unknown XML file is not', () => {
		expect(open('<html><body>Sign in</body></html>')).toMatchObject({ ok: false, refusal: { code: 'unknown-xml' } });
	});
});

describe('writers', () => {
	it('the same activity written as TCX and GPX gives the same heart rate and cadence', () => {
		fc.assert(
			fc.property(
				fc.array(fc.tuple(fc.integer({ min: 35, max: 215 }), fc.integer({ min: 70, max: 110 })), {
					minLength: 2,
					maxLength: 60
				}),
				fc.constantFrom('running', 'cycling'),
				(samples, activity) => {
					const tS = Float64Array.from(samples, (_, i) => START_S + i);
					const recording: RecordingToWrite = {
						device: { maker: null, product: 'Ostrel <Band> & co', serial: '3917', firmware: '4.10' },
						activity,
						traces: [
							{ kind: 'heartRate', tS, value: Float64Array.from(samples, (sample) => sample[0]) },
							{
								kind: 'cadence',
								tS,
								value: Float64Array.from(samples, (sample) => (activity === 'running' ? 2 : 1) * sample[1])
							}
						]
					};
					for (const text of [writeTcx(recording), writeGpx(recording)]) {
						const back = read(text);
						expect(back.device.product).toBe('Ostrel <Band> & co');
						for (const trace of recording.traces) {
							expect([...(traceOf(back, trace.kind)?.value ?? [])]).toEqual([...trace.value]);
							expect([...(traceOf(back, trace.kind)?.tS ?? [])]).toEqual([...tS]);
						}
					}
				}
			),
			{ numRuns: 30 }
		);
	});
});
