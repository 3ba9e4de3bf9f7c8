/**
 * Bytes of a file to a recording: the one door to all readers.
 *
 * What a file is, its content decides; its name is only compared with that (`renamed`). Files may be compressed:
 * gzip and zip are unpacked within a bound, junk that programs add to archives is passed over.
 */
import { gunzipBounded, isGzip, isZip, listZip, MOST_UNPACKED_BYTES, unzipEntry } from './archive/unpack';
import { readFit } from './fit/read-fit';
import { hasFitHeader } from './fit/walk';
import type { FileFormat, Reading, ReadingWarning, ReadOptions } from './recording';
import { readGuessedTable } from './table/read-table';
import { looksLikeRrText, readRrText } from './table/rr-text';
import { decodeText, looksLikeText } from './text';
import { readGpx } from './xml/read-gpx';
import { readTcx } from './xml/read-tcx';

export { guessTableMapping } from './table/guess';
export type { ChannelColumn, TableGuess, TableMapping } from './table/mapping';
export { readTable } from './table/read-table';
export { decodeText } from './text';

/** One recording, or refusal, out of an archive or a single file. */
export interface NamedReading {
	name: string;
	reading: Reading;
}

/**
 * Reads one file.
 *
 * @param bytes content of the file; gzip, and a zip that holds a single recording, are unpacked first
 * @param fileName its name, for messages
 * @param options what the one who imports knows and the file does not say
 * @returns a recording with every oddity told, or a refusal with its remedy; never throws on bad content
 */
export function readFile(bytes: Uint8Array, fileName: string, options: ReadOptions = {}): Reading {
	const readings = readFiles(bytes, fileName, options);
	if (readings.length === 1) return readings[0].reading;
	const good = readings.filter(({ reading }) => reading.ok);
	if (good.length === 1) return good[0].reading;
	return refuse(
		'several-recordings',
		`${fileName} is an archive with ${readings.length} files. Import it as an archive, or unpack it and choose one: ${readings
			.slice(0, 5)
			.map(({ name }) => name)
			.join(', ')}.`
	);
}

/**
 * Reads a file or every recording in an archive.
 *
 * @param bytes content of the file
 * @param name its name; entries of an archive carry their own path
 * @param options as for `readFile`
 * @returns one reading per file, refusals included; entries that programs add as junk are passed over
 */
export function readFiles(bytes: Uint8Array, name: string, options: ReadOptions = {}): NamedReading[] {
	return readPacked(bytes, name, options, 0);
}

const DEEPEST_ARCHIVE = 2;

function readPacked(bytes: Uint8Array, name: string, options: ReadOptions, depth: number): NamedReading[] {
	const most = options.maxUnpackedBytes ?? MOST_UNPACKED_BYTES;
	if (depth > DEEPEST_ARCHIVE && (isGzip(bytes) || isZip(bytes)))
		return [
			{
				name,
				reading: refuse(
					'archive-in-archive',
					`${name} is an archive inside archives. Unpack it and import what is in it.`
				)
			}
		];
	if (isGzip(bytes)) {
		const unpacked = gunzipBounded(bytes, most);
		if (!unpacked.ok) return [{ name, reading: refuse(unpacked.code, unpacked.message) }];
		const inner = readPacked(unpacked.bytes, name.replace(/\.gz$/i, ''), options, depth + 1);
		if (!unpacked.cut) return inner;
		const cut: ReadingWarning = {
			code: 'missing-tail',
			message: `The compressed file is cut. The ${unpacked.bytes.length} bytes that could be unpacked are read.`
		};
		return inner.map((entry) => ({ ...entry, reading: withWarning(entry.reading, cut) }));
	}
	if (!isZip(bytes)) return [{ name, reading: readPlain(bytes, name, options) }];
	const listed = listZip(bytes, most);
	if (!listed.ok) return [{ name, reading: refuse(listed.code, listed.message) }];
	if (listed.entries.length === 0)
		return [{ name, reading: refuse('empty-archive', `${name} holds no files that could be recordings.`) }];
	const readings: NamedReading[] = [];
	const seen = new Set<string>();
	for (const entry of listed.entries) {
		if (seen.has(entry.name)) continue;
		seen.add(entry.name);
		const unpacked = unzipEntry(bytes, entry.name);
		if (unpacked.ok) readings.push(...readPacked(unpacked.bytes, entry.name, options, depth + 1));
		else readings.push({ name: entry.name, reading: refuse(unpacked.code, unpacked.message) });
	}
	return readings;
}

/** Extensions that each format goes by. */
const EXTENSIONS: Record<FileFormat, RegExp> = {
	fit: /\.fit$/i,
	tcx: /\.(tcx|xml)$/i,
	gpx: /\.(gpx|xml)$/i,
	csv: /\.(csv|tsv|txt|tab|dat|log)$/i,
	'rr-text': /\.(csv|tsv|txt|rr|ibi|hrv|dat|log|hrm)$/i
};

function readPlain(bytes: Uint8Array, name: string, options: ReadOptions): Reading {
	const most = options.maxUnpackedBytes ?? MOST_UNPACKED_BYTES;
	if (bytes.length > most)
		return refuse(
			'too-large',
			`${name} has ${Math.round(bytes.length / 1e6)} MB; at most ${Math.round(most / 1e6)} MB are read. No recording is that long; export each one for itself.`
		);
	if (bytes.length === 0) return refuse('empty-file', `${name} is empty (0 bytes). Copy it from the device again.`);
	const reading = readByContent(bytes, name, options);
	if (!reading.ok) return reading;
	const { format } = reading.recording;
	const extension = /\.[a-z0-9]+$/i.exec(name)?.[0];
	if (extension === undefined || EXTENSIONS[format].test(extension)) return reading;
	return withWarning(reading, {
		code: 'renamed',
		message: `The name ends in ${extension}, the content is ${format === 'rr-text' ? 'a list of RR intervals' : format.toUpperCase()}. It is read as what it is.`
	});
}

function readByContent(bytes: Uint8Array, name: string, options: ReadOptions): Reading {
	if (hasFitHeader(bytes)) return readFit(bytes, options);
	if (!looksLikeText(bytes))
		return refuse(
			'unknown-format',
			`${name} is none of FIT, TCX, GPX, CSV or interval text. Export the recording in one of these formats.`
		);
	const { text, warnings } = decodeText(bytes);
	const reading = readText(text, name, options);
	return warnings.reduce(withWarning, reading);
}

function readText(text: string, name: string, options: ReadOptions): Reading {
	const start = text.slice(0, 4096).trimStart();
	if (start === '') return refuse('empty-file', `${name} holds nothing but blanks. Copy it from the device again.`);
	if (/^<|^[^<\n]{0,20}<\?xml/.test(start)) {
		// The root may stand behind comments and a document type.
		const root = /<(?:[\w.-]+:)?(TrainingCenterDatabase|gpx|Activities|trk)[\s>/]/i
			.exec(text.slice(0, 65_536))?.[1]
			.toLowerCase();
		if (root === 'gpx' || root === 'trk') return readGpx(text, options);
		if (root !== undefined) return readTcx(text, options);
		if (/<!ENTITY/i.test(text.slice(0, 65_536))) return readGpx(text, options);
		return refuse(
			'unknown-xml',
			`${name} is XML, but neither TCX nor GPX. Export the recording as FIT, TCX, GPX or CSV.`
		);
	}
	if (/^[{[]/.test(start) && /["\]}{\d\s]/.test(start[1] ?? ''))
		return refuse(
			'unknown-format',
			`${name} is JSON, which is not read. Export the recording as FIT, TCX, GPX or CSV.`
		);
	if (looksLikeRrText(text)) return readRrText(text, options);
	return readGuessedTable(text, options);
}

function withWarning(reading: Reading, warning: ReadingWarning): Reading {
	if (!reading.ok) return { ...reading, warnings: [warning, ...reading.warnings] };
	return { ok: true, recording: { ...reading.recording, warnings: [warning, ...reading.recording.warnings] } };
}

function refuse(code: string, message: string): Reading {
	return { ok: false, refusal: { code, message }, warnings: [] };
}
