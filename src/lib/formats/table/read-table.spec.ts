import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { guessTableMapping, readFile, readTable } from '..';
import { traceOf, type ChannelKind, type ReadOptions, type Recording } from '../recording';
import { writeCsv, type RecordingToWrite } from '../write';
import { columnMeaning } from './column-meaning';
import { numericTimeForm, parseDateTime } from './time-form';

const START_S = 1_715_000_000;
const N = 30;
const rows = (line: (i: number) => string, n = N) => Array.from({ length: n }, (_, i) => line(i)).join('\n');
const iso = (i: number) => new Date((START_S + i) * 1000).toISOString();
const two = (n: number) => String(n).padStart(2, '0');

function read(content: string | Uint8Array, options?: ReadOptions): Recording {
	const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
	const reading = readFile(bytes, 'a.csv', options);
	if (!reading.ok) throw new Error(`${reading.refusal.code}: ${reading.refusal.message}`);
	return reading.recording;
}

function refusalOf(content: string): { code: string; message: string } {
	const reading = readFile(new TextEncoder().encode(content), 'a.csv');
	if (reading.ok) throw new Error('was read');
	return reading.refusal;
}

const codes = (recording: Recording) => recording.warnings.map((warning) => warning.code);
const first = (recording: Recording, kind: ChannelKind) => traceOf(recording, kind)?.value[0];

/** Heart rate 80, 81, … once a second from `START_S`, whatever the shape of the table. */
function expectTheRun(recording: Recording, startS = START_S): void {
	const trace = traceOf(recording, 'heartRate');
	expect([...(trace?.value ?? [])]).toEqual(Array.from({ length: N }, (_, i) => 80 + i));
	expect([...(trace?.tS ?? [])]).toEqual(Array.from({ length: N }, (_, i) => startS + i));
}

describe('shapes of tables', () => {
	it.each([
		['commas and ISO times', 'time,hr\n' + rows((i) => `${iso(i)},${80 + i}`)],
		['semicolons and decimal commas', 'Time;Speed (km/h);HR\n' + rows((i) => `${iso(i)};9,${i};${80 + i}`)],
		['tabs and epoch ns', 'timestamp\tbpm\n' + rows((i) => `${START_S + i}000000000\t${80 + i}`)],
		['epoch ms', 'unix_ms,pulse\n' + rows((i) => `${START_S + i}000,${80 + i}`)],
		['epoch s in quotes', '"ts","heart_rate"\n' + rows((i) => `"${START_S + i}","${80 + i}"`)],
		['blanks', 'time  hr\n' + rows((i) => `${iso(i)}    ${80 + i}`)],
		[
			'a zone of +02:00',
			'time,hr\n' + rows((i) => `${new Date((START_S + i + 7200) * 1000).toISOString().slice(0, 19)}+02:00,${80 + i}`)
		],
		[
			'old line ends and a byte-order mark',
			'\uFEFFtime,hr\r' + rows((i) => `${iso(i)},${80 + i}`).replaceAll('\n', '\r')
		],
		['a sentence and a blank line above', 'Exported on request\n\ntime,hr\n' + rows((i) => `${iso(i)},${80 + i}`)],
		[
			'one row a channel',
			'timestamp,type,value\n' + rows((i) => `${iso(i)},heart_rate,${80 + i}\n${iso(i)},cadence,170`)
		],
		[
			'one channel after the other',
			'timestamp,metric,value\n' +
				rows((i) => `${iso(i)},cadence,85`) +
				'\n' +
				rows((i) => `${iso(i)},Heart Rate,${80 + i}`)
		],
		[
			'lines and columns exchanged',
			`time,${rows(iso).replaceAll('\n', ',')}\nheart_rate,${rows((i) => String(80 + i)).replaceAll('\n', ',')}`
		]
	])('%s', (_, content) => {
		const recording = read(content);
		expectTheRun(recording);
		expect(codes(recording)).toEqual([]);
	});

	it('takes a table without names by its content, and says what it took', () => {
		const recording = read(rows((i) => `${80 + i},${iso(i)}`));
		expectTheRun(recording);
		expect(recording.warnings[0]).toMatchObject({ code: 'no-header' });
		expect(recording.warnings[0].message).toContain('Column 2 is taken as the time and column 1 as the heart rate');
	});

	it('reads ISO-8859-1 and says that letters may be wrong', () => {
		const text = 'Zeit;H\u00f6he (m);Puls\n' + rows((i) => `${iso(i)};100,5;${80 + i}`);
		const recording = read(Uint8Array.from(text, (letter) => letter.charCodeAt(0)));
		expectTheRun(recording);
		expect(first(recording, 'altitude')).toBe(100.5);
		expect(codes(recording)).toEqual(['not-utf-8']);
	});

	it('reads UTF-16, as spreadsheets save it', () => {
		const text = '\uFEFFtime\thr\n' + rows((i) => `${iso(i)}\t${80 + i}`);
		const bytes = new Uint8Array(text.length * 2);
		for (let i = 0; i < text.length; i++) new DataView(bytes.buffer).setUint16(2 * i, text.charCodeAt(i), true);
		expectTheRun(read(bytes));
	});

	it('starts elapsed times at the date and time that stand in the summary above', () => {
		const recording = read(
			'Name,Sport,Date,Start time,Duration,Average heart rate (bpm)\nJA,RUNNING,06-05-2024,12:53:20,00:44:10,140\nSample rate,Time,HR (bpm),Cadence\n' +
				rows((i) => `${i ? '' : 1},00:00:${two(i)},${80 + i},80`)
		);
		expectTheRun(recording);
		expect(first(recording, 'cadence')).toBe(160);
		expect(codes(recording)).toEqual(['no-time-zone', 'cadence-doubled']);
	});

	it('takes device, serial and start from comment lines', () => {
		const recording = read(
			'# device: Corvane S\n# serial: 771\n# firmware: 2.1\n# start: 2024-05-06T12:53:20Z\nelapsed_s,heart_rate_bpm\n' +
				rows((i) => `${i},${80 + i}`)
		);
		expectTheRun(recording);
		expect(recording.device).toEqual({ maker: null, product: 'Corvane S', serial: '771', firmware: '2.1' });
	});
});

describe('times that need a word', () => {
	it('reads times without a zone as UTC with a warning, and with the offset that the importer gives', () => {
		const text = 'time,hr\n' + rows((i) => `${iso(i).slice(0, 19)},${80 + i}`);
		expectTheRun(read(text));
		expect(codes(read(text))).toEqual(['no-time-zone']);
		expectTheRun(read(text, { utcOffsetS: 7200 }), START_S - 7200);
	});

	it('puts times of day on the day the importer gives, and past midnight on the next', () => {
		const clock = (i: number) => `${i < 15 ? '23:59' : '00:00'}:${two(i < 15 ? 45 + i : i - 15)}`;
		const text = 'time,HR\n' + rows((i) => `${clock(i)},${80 + i}`);
		const midnight = Math.floor(START_S / 86_400) * 86_400;
		const recording = read(text, { startS: midnight });
		expectTheRun(recording, midnight + 86_400 - 15);
		expect(codes(recording)).toEqual(['past-midnight']);
		expect(codes(read(text))).toEqual(['no-date', 'past-midnight']);
	});

	it('lets elapsed seconds without any start begin at 0 and says so once', () => {
		const recording = read('seconds,heart_rate\n' + rows((i) => `${i},${80 + i}`));
		expectTheRun(recording, 0);
		expect(codes(recording)).toEqual(['no-clock']);
	});

	it('says which way it read a date that could be read two ways', () => {
		const recording = read('Timestamp,HR\n' + rows((i) => `06/05/2024 12:53:${two(20 + i)},${80 + i}`));
		expectTheRun(recording);
		expect(codes(recording)).toContain('ambiguous-date');
	});

	it('tells times that a spreadsheet has rounded away', () => {
		const recording = read('timestamp,bpm\n' + rows((i) => `1.7186E9,${80 + i}`));
		expectTheRun(recording, 1_718_600_000);
		expect(codes(recording)).toContain('rounded-time-stamps');
	});

	it.each([
		['2024-05-06T12:53:20Z', true],
		['2024-05-06 12:53:20.000+00:00', true],
		['2024-05-06T04:53:20-08:00', true],
		['20240506T125320Z', true],
		['2024/05/06 12:53:20', false],
		['06.05.2024 12:53:20', false],
		['May 6, 2024, 12:53:20 PM', false],
		['Mon May 06 14:53:20 GMT+02:00 2024', true],
		['2024-05-06T14:53:20+02:00[Europe/Somewhere]', true]
	])('%s is the same moment', (text, hasZone) => {
		expect(parseDateTime(text)).toEqual({ tS: START_S, hasZone, hasTime: true });
	});

	it.each(['2024-13-01', '2024-02-30 10:00', '99:99:99', 'hello', '1234567', '2024-05-06T25:99:00Z'])(
		'%s is no date',
		(text) => {
			expect(parseDateTime(text)).toBeNull();
		}
	);

	it('tells seconds, milliseconds, microseconds, nanoseconds, and days of a spreadsheet by their size', () => {
		expect(numericTimeForm([1.7e9, 1.7e9 + 1], 'time')).toBe('epoch-s');
		expect(numericTimeForm([1.7e12, 1.7e12 + 1000], 'time')).toBe('epoch-ms');
		expect(numericTimeForm([1.7e15, 1.7e15 + 1e6], 'time')).toBe('epoch-us');
		expect(numericTimeForm([1.7e18, 1.7e18 + 1e9], 'time')).toBe('epoch-ns');
		expect(numericTimeForm([45_418.5, 45_418.50001], 'date time')).toBe('day-number');
		expect(numericTimeForm([0, 1, 2], 'time')).toBe('elapsed-s');
		expect(numericTimeForm([0, 1000, 2000], 'time')).toBe('elapsed-ms');
	});
});

describe('values and names', () => {
	it('takes neither 0 nor 255 for a heart rate, and counts them', () => {
		const recording = read('time,hr\n' + rows((i) => `${iso(i)},${i % 10 === 0 ? 0 : i % 10 === 5 ? 255 : 80}`));
		expect(traceOf(recording, 'heartRate')?.value.length).toBe(24);
		expect(codes(recording)).toEqual(['heart-rate-zero', 'heart-rate-255', 'heart-rate-missing']);
	});

	it('keeps a fractional heart rate', () => {
		expect(first(read('time,hr\n' + rows((i) => `${iso(i)},${80.25 + i}`)), 'heartRate')).toBe(80.25);
	});

	it('brings km/h, miles, feet and degrees Fahrenheit to the units that are kept', () => {
		const recording = read(
			'time,hr,speed [km/h],distance (mi),altitude (ft),temperature (F)\n' + rows((i) => `${iso(i)},80,36,1,1000,50`)
		);
		expect(first(recording, 'speed')).toBeCloseTo(10, 9);
		expect(first(recording, 'distance')).toBeCloseTo(1609.344, 9);
		expect(first(recording, 'altitude')).toBeCloseTo(304.8, 9);
		expect(first(recording, 'temperature')).toBeCloseTo(10, 9);
	});

	it('joins decimals that a comma parts from their whole numbers, before and behind the heart rate', () => {
		const recording = read('time,speed,hr,distance\n' + rows((i) => `${iso(i)},3,${i % 10},${80 + i},${10 * i},25`));
		expectTheRun(recording);
		expect(traceOf(recording, 'speed')?.value[4]).toBe(3.4);
		expect(traceOf(recording, 'distance')?.value[2]).toBe(20.25);
		expect(codes(recording)).toEqual(['decimal-comma']);
	});

	it('reads such a table where whole numbers carry no decimals, and leaves out what cannot be told', () => {
		const recording = read(
			'time,hr,speed,altitude\n' + rows((i) => `${iso(i)},${80 + i},${i % 3 ? `3,${i}` : '3'},${100 + i},5`)
		);
		expectTheRun(recording);
		expect(traceOf(recording, 'speed')?.value[0]).toBe(3.1);
		expect(traceOf(recording, 'speed')?.value.length).toBe(20);
		expect(codes(recording)).toEqual(['decimal-comma']);
	});

	it('asks which of two heart rates is meant, and reads the other on demand', () => {
		const text = 'time,hr_strap,hr_watch\n' + rows((i) => `${iso(i)},${80 + i},${90 + i}`);
		expectTheRun(read(text));
		expect(read(text).heartRateSources?.map((source) => source.key)).toEqual(['hr_strap', 'hr_watch']);
		expect(first(read(text, { heartRateSource: 'hr_watch' }), 'heartRate')).toBe(90);
	});

	it('never takes a summary or a setting for the heart rate', () => {
		for (const name of [
			'Average heart rate (bpm)',
			'HR max',
			'hr_zone',
			'Heart rate limit',
			'heart rate variability',
			'HR %',
			'Min HR'
		])
			expect(columnMeaning(name)).toBeUndefined();
		for (const name of [
			'HR',
			'hr_bpm',
			'Heart Rate (bpm)',
			'heartRate',
			'HeartRateBpm',
			'Puls',
			'Herzfrequenz',
			'Fréquence cardiaque',
			'bpm'
		])
			expect(columnMeaning(name)).toMatchObject({ kind: 'heartRate' });
	});

	it('refuses a table without a heart rate and names its columns', () => {
		expect(refusalOf('time,steps\n' + rows((i) => `${iso(i)},${80 + i}`))).toMatchObject({
			code: 'no-heart-rate',
			message: expect.stringContaining('time, steps')
		});
	});

	it('refuses a heart rate without any time and says what is missing', () => {
		expect(refusalOf('hr,power\n' + rows((i) => `${80 + i},200`))).toMatchObject({ code: 'no-time' });
		expect(refusalOf('hr\n' + rows((i) => `${80 + i}`))).toMatchObject({ code: 'no-time' });
	});

	it('can be told the mapping by hand', () => {
		const text = 'when,what\n' + rows((i) => `${iso(i)},${80 + i}`);
		const { mapping } = guessTableMapping('time,hr\n' + rows((i) => `${iso(i)},${80 + i}`));
		if (!mapping) throw new Error('no guess');
		const reading = readTable(text, mapping);
		if (!reading.ok) throw new Error(reading.refusal.message);
		expectTheRun(reading.recording);
	});
});

describe('RR intervals as text', () => {
	const rrMs = Array.from({ length: N }, (_, i) => 800 + i);
	const stamps = rrMs.map((_, i) => rrMs.slice(0, i + 1).reduce((a, b) => a + b, 0) / 1000);

	it.each([
		['ms a line', rows((i) => `${rrMs[i]}`)],
		['s a line', rows((i) => (rrMs[i] / 1000).toFixed(3))],
		['decimal commas', rows((i) => (rrMs[i] / 1000).toFixed(3).replace('.', ','))],
		['a comment and a name above', '# strap\nRR\n' + rows((i) => `${rrMs[i]}`)],
		['pairs of s and ms', rows((i) => `${stamps[i].toFixed(3)} ${rrMs[i]}`)],
		['pairs of ms and s', rows((i) => `${(stamps[i] * 1000).toFixed(0)};${(rrMs[i] / 1000).toFixed(3)}`)]
	])('%s', (_, text) => {
		const recording = read(text);
		expect(recording.format).toBe('rr-text');
		const trace = traceOf(recording, 'rrInterval');
		expect([...(trace?.value ?? [])].map(Math.round)).toEqual(rrMs);
		for (let i = 0; i < N; i++) expect(trace?.tS[i]).toBeCloseTo(stamps[i], 2);
		expect(codes(recording)).toEqual(['no-clock', 'hr-from-rr']);
		expect(first(recording, 'heartRate')).toBeCloseTo(74.9, 1);
	});

	it('reads a named column of intervals beside its times as a table', () => {
		const recording = read('time,rr_ms\n' + rows((i) => `${(START_S + stamps[i]).toFixed(3)},${rrMs[i]}`));
		expect(recording.format).toBe('csv');
		expect([...(traceOf(recording, 'rrInterval')?.value ?? [])]).toEqual(rrMs);
	});
});

describe('writeCsv', () => {
	it('is read back as written in every form it offers', () => {
		fc.assert(
			fc.property(
				fc.array(fc.tuple(fc.integer({ min: 35, max: 215 }), fc.integer({ min: 0, max: 1400 })), {
					minLength: 25,
					maxLength: 80
				}),
				fc.constantFrom<',' | ';' | '\t'>(',', ';', '\t'),
				fc.constantFrom<'iso' | 'iso-local' | 'epoch-s' | 'epoch-ms' | 'elapsed'>(
					'iso',
					'iso-local',
					'epoch-s',
					'epoch-ms',
					'elapsed'
				),
				fc.boolean(),
				(samples, delimiter, time, decimalComma) => {
					const tS = Float64Array.from(samples, (_, i) => START_S + i);
					const recording: RecordingToWrite = {
						device: { maker: 'Bramling Bench', product: 'Corvane S', serial: 'C-771', firmware: '2.1.0' },
						activity: 'cycling',
						traces: [
							{ kind: 'heartRate', tS, value: Float64Array.from(samples, (sample) => sample[0]) },
							{ kind: 'speed', tS, value: Float64Array.from(samples, (sample) => sample[1] / 100 + 0.01) }
						]
					};
					const back = read(writeCsv(recording, { delimiter, time, decimalComma }), { startS: START_S });
					expect(back.device).toEqual(recording.device);
					expect(back.activity).toBe('cycling');
					for (const trace of recording.traces) {
						expect([...(traceOf(back, trace.kind)?.value ?? [])]).toEqual(
							[...trace.value].map((value) => Number(value.toFixed(3)))
						);
						expect([...(traceOf(back, trace.kind)?.tS ?? [])]).toEqual([...tS]);
					}
				}
			),
			{ numRuns: 60 }
		);
	});
});
