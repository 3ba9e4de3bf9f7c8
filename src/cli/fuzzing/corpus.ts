/** Files to damage: generated ones of every format, real recordings where they are at hand, and files made to do harm. */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { gzipSync, strToU8, zipSync } from 'fflate';
import { writeCsv, writeFit, writeGpx, writeTcx, type RecordingToWrite } from '../../lib/formats/write';

export interface CorpusFile {
	name: string;
	bytes: Uint8Array;
}

const START_S = 1_715_000_000;

function generatedRecording(n: number, activity: string): RecordingToWrite {
	const tS = Float64Array.from({ length: n }, (_, i) => START_S + i);
	const wave = (low: number, high: number, period: number) =>
		Float64Array.from({ length: n }, (_, i) => Math.round(low + (high - low) * (0.5 + 0.5 * Math.sin(i / period))));
	const rr: number[] = [];
	const beats: number[] = [];
	for (let t = START_S; t < START_S + n - 1;) {
		const interval = 600 + Math.round(100 * Math.sin(rr.length / 30));
		t += interval / 1000;
		rr.push(interval);
		beats.push(t);
	}
	return {
		device: { maker: null, product: 'Halden ECG strap', serial: '40217', firmware: '4.12' },
		activity,
		traces: [
			{ kind: 'heartRate', tS, value: wave(70, 180, 90) },
			{ kind: 'rrInterval', tS: Float64Array.from(beats), value: Float64Array.from(rr) },
			{ kind: 'cadence', tS, value: wave(120, 180, 50) },
			{ kind: 'speed', tS, value: wave(2, 6, 40) },
			{ kind: 'altitude', tS, value: wave(100, 300, 200) }
		]
	};
}

/** Sound files of every format that is read. */
export function generatedFiles(): CorpusFile[] {
	const run = generatedRecording(400, 'running');
	const ride = generatedRecording(120, 'cycling');
	const intervals = ride.traces[1].value;
	const csv = strToU8(writeCsv(ride));
	const long = [
		'time,type,value',
		...[...ride.traces[0].value].flatMap((bpm, i) => [`${START_S + i},heart_rate,${bpm}`, `${START_S + i},cadence,85`])
	].join('\n');
	return [
		{ name: 'run.fit', bytes: writeFit(run) },
		{ name: 'big-endian.fit', bytes: writeFit(ride, { bigEndian: true }) },
		{ name: 'unfinished.fit', bytes: writeFit(ride, { finished: false }) },
		{ name: 'chained.fit', bytes: Buffer.concat([writeFit(ride), writeFit(run)]) },
		{ name: 'run.tcx', bytes: strToU8(writeTcx(run)) },
		{ name: 'run.gpx', bytes: strToU8(writeGpx(run)) },
		{ name: 'ride.csv', bytes: csv },
		{
			name: 'semicolon.csv',
			bytes: strToU8(writeCsv(ride, { delimiter: ';', decimalComma: true, time: 'iso-local' }))
		},
		{ name: 'elapsed.tsv', bytes: strToU8(writeCsv(ride, { delimiter: '\t', time: 'elapsed' })) },
		{ name: 'long.csv', bytes: strToU8(long) },
		{
			name: 'transposed.csv',
			bytes: strToU8(
				`time,${Array.from({ length: 120 }, (_, i) => START_S + i).join(',')}\nhr,${[...ride.traces[0].value].join(',')}`
			)
		},
		{ name: 'rr.txt', bytes: strToU8([...intervals].join('\n')) },
		{ name: 'ride.csv.gz', bytes: gzipSync(csv) },
		{ name: 'day.zip', bytes: zipSync({ 'a.csv': csv, 'b.fit': writeFit(ride), '__MACOSX/._a.csv': strToU8('x') }) }
	];
}

/** Real recordings from a folder, those above `mostBytes` left out; none where the folder is absent. */
export function realFiles(folder: string, mostBytes: number): CorpusFile[] {
	if (!existsSync(folder)) return [];
	return readdirSync(folder)
		.filter((name) => /\.(fit|tcx|gpx|csv)$/i.test(name))
		.map((name) => ({ name, bytes: new Uint8Array(readFileSync(join(folder, name))) }))
		.filter((file) => file.bytes.length <= mostBytes);
}

/** Files made to exhaust memory or time; `size` in bytes is what they grow to. Made one at a time, because they are large. */
export function* harmfulFiles(size: number): Generator<CorpusFile> {
	const filled = (byte: number) => new Uint8Array(size).fill(byte);
	const behind = (head: string, byte: number) => Buffer.concat([strToU8(head), filled(byte)]);
	const text = (content: string) => strToU8(content);
	const entities = Array.from({ length: 10 }, (_, i) => `<!ENTITY e${i + 1} "${`&e${i};`.repeat(10)}">`).join('');
	yield {
		name: 'entities.gpx',
		bytes: text(
			`<?xml version="1.0"?><!DOCTYPE gpx [<!ENTITY e0 "ha">${entities}]><gpx><trk><trkseg><trkpt><hr>&e10;</hr></trkpt></trkseg></trk></gpx>`
		)
	};
	yield {
		name: 'external.gpx',
		bytes: text('<!DOCTYPE gpx [<!ENTITY x SYSTEM "file:///etc/hostname">]><gpx>&x;</gpx>')
	};
	yield { name: 'zeros.gz', bytes: gzipSync(filled(0)) };
	yield { name: 'zeros.zip', bytes: zipSync({ 'a.csv': filled(0) }) };
	yield { name: 'commas.csv', bytes: filled(0x2c) };
	yield { name: 'quotes.csv', bytes: filled(0x22) };
	yield { name: 'line-ends.csv', bytes: filled(0x0a) };
	yield { name: 'carriage-returns.csv', bytes: behind('time,hr\n', 0x0d) };
	yield { name: 'angles.gpx', bytes: behind('<gpx>', 0x3c) };
	yield { name: 'digits.txt', bytes: filled(0x31) };
	yield { name: 'header-and-commas.csv', bytes: behind('time,hr\n', 0x2c) };
	yield { name: 'deep.gpx', bytes: text('<gpx>' + '<a>'.repeat(Math.min(size / 3, 1_000_000))) };
	yield { name: 'ampersands.gpx', bytes: behind('<gpx><trk>', 0x26) };
	yield { name: 'one-tag.gpx', bytes: behind('<gpx ', 0x61) };
	yield { name: 'definitions.fit', bytes: manyDefinitions(Math.min(size, 30_000_000)) };
	yield { name: 'parts.fit', bytes: manyParts(Math.min(size, 10_000_000)) };
	yield { name: 'devices.fit', bytes: manyDevices(Math.min(size, 10_000_000)) };
	yield {
		name: 'negative-dates.csv',
		bytes: text('time,hr\n' + Array.from({ length: 50 }, (_, i) => `-${i * 1e9},80`).join('\n'))
	};
	yield {
		name: 'far-dates.csv',
		bytes: text(
			'time,hr\n' +
				Array.from({ length: 50 }, (_, i) => `9999-12-31T23:59:${String(i).padStart(2, '0')}Z,80`).join('\n')
		)
	};
}

const FIT_HEADER = [14, 0x20, 0, 0, 0, 0, 0, 0, 0x2e, 0x46, 0x49, 0x54, 0, 0];

/** Headers of parts of one byte each, all of them damaged. */
function manyParts(size: number): Uint8Array {
	const bytes = new Uint8Array(size);
	for (let at = 0; at + 20 <= size; at += 20)
		bytes.set([...FIT_HEADER.slice(0, 4), 1, ...FIT_HEADER.slice(5), 9, 9, 9, 9, 9, 9], at);
	return bytes;
}

/** One definition and nothing but descriptions of devices. */
function manyDevices(size: number): Uint8Array {
	const bytes = new Uint8Array(size);
	bytes.set([...FIT_HEADER, 0x40, 0, 0, 23, 0, 1, 0, 1, 2]);
	return bytes;
}

/** A FIT header over a definition before each record, which costs a reader more than records alone. */
function manyDefinitions(size: number): Uint8Array {
	const bytes = new Uint8Array(size);
	bytes.set(FIT_HEADER);
	for (let at = 14; at + 11 <= size; at += 11) bytes.set([0x40, 0, 0, 20, 0, 1, 3, 1, 2, 0, 80].slice(0, 11), at);
	return bytes;
}
