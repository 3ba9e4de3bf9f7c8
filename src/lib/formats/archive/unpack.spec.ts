import { gzipSync, strToU8, zipSync } from 'fflate';
import { describe, expect, it } from 'vitest';
import { readFile, readFiles } from '..';

const csv = (bpm: number) =>
	strToU8(
		'time,hr\n' +
			Array.from({ length: 20 }, (_, i) => `${new Date((1_715_000_000 + i) * 1000).toISOString()},${bpm + i}`).join(
				'\n'
			)
	);

describe('compressed files', () => {
	it('reads a gzip as what is in it', () => {
		expect(readFile(gzipSync(csv(80)), 'a.csv.gz')).toMatchObject({
			ok: true,
			recording: { format: 'csv', warnings: [] }
		});
	});

	it('reads what a cut gzip still gives, and says so', () => {
		const noise = Array.from({ length: 4000 }, (_, i) => `${1_715_000_000 + i},${60 + ((i * 7919) % 97)}`).join('\n');
		const packed = gzipSync(strToU8('time,hr\n' + noise));
		const reading = readFile(packed.subarray(0, packed.length >> 1), 'a.csv.gz');
		if (!reading.ok) throw new Error(reading.refusal.message);
		expect(reading.recording.warnings[0].code).toBe('missing-tail');
	});

	it('reads each recording of a zip and passes over what programs add', () => {
		const zip = zipSync({
			'day/strap.csv': csv(80),
			'day/watch.CSV': csv(90),
			'__MACOSX/day/._strap.csv': strToU8('junk'),
			'day/.DS_Store': strToU8('junk'),
			'day/Thumbs.db': strToU8('junk'),
			'note.txt': strToU8('the wearer felt well')
		});
		const readings = readFiles(zip, 'day.zip');
		expect(readings.map(({ name, reading }) => [name, reading.ok])).toEqual([
			['day/strap.csv', true],
			['day/watch.CSV', true],
			['note.txt', false]
		]);
		expect(readFile(zip, 'day.zip')).toMatchObject({ ok: false, refusal: { code: 'several-recordings' } });
	});

	it('opens a zip with one recording as that recording', () => {
		expect(readFile(zipSync({ 'strap.csv': csv(80) }), 'strap.zip').ok).toBe(true);
	});

	it('refuses a small file that would unpack to more than the bound, without unpacking it all', () => {
		const zeros = new Uint8Array(30_000_000);
		const options = { maxUnpackedBytes: 10_000_000 };
		expect(readFile(gzipSync(zeros), 'a.gz', options)).toMatchObject({
			ok: false,
			refusal: { code: 'unpacks-too-large' }
		});
		expect(readFile(zipSync({ 'a.csv': zeros }), 'a.zip', options)).toMatchObject({
			ok: false,
			refusal: { code: 'unpacks-too-large' }
		});
	});

	it('does not follow archives into archives without end', () => {
		let bytes: Uint8Array = csv(80);
		for (let i = 0; i < 6; i++) bytes = gzipSync(bytes);
		expect(readFile(bytes, 'a.gz')).toMatchObject({ ok: false, refusal: { code: 'archive-in-archive' } });
	});

	it('refuses a damaged zip with a sentence', () => {
		const zip = zipSync({ 'a.csv': csv(80) });
		expect(readFile(zip.subarray(0, 60), 'a.zip')).toMatchObject({ ok: false, refusal: { code: 'damaged-archive' } });
	});
});

describe('names and contents', () => {
	it('goes by content and tells that the name says otherwise', () => {
		expect(readFile(csv(80), 'walk.fit')).toMatchObject({
			ok: true,
			recording: { format: 'csv', warnings: [{ code: 'renamed' }] }
		});
	});

	it.each([
		['nothing', new Uint8Array(0), 'empty-file'],
		['blanks', strToU8('  \n \n'), 'empty-file'],
		[
			'a picture',
			Uint8Array.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 0, 0, 0x0d, 0, 1, 2, 3]),
			'unknown-format'
		],
		['JSON', strToU8('{"heart_rate": [80, 81]}'), 'unknown-format'],
		['a letter', strToU8('Dear tester,\nthe strap is in the box.\n'), 'no-heart-rate']
	])('refuses %s with its own code', (_, bytes, code) => {
		expect(readFile(bytes, 'a.bin')).toMatchObject({ ok: false, refusal: { code } });
	});
});
