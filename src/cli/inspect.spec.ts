import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { zipSync } from 'fflate';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { writeFit, type RecordingToWrite } from '../lib/formats/write';
import { inspect } from './inspect';

const START_S = 1_715_000_000;
const RIDE: RecordingToWrite = {
	device: { maker: null, product: 'Halden ECG strap', serial: '40217', firmware: '4.12' },
	activity: 'cycling',
	traces: [
		{
			kind: 'heartRate',
			tS: Float64Array.of(0, 1, 2, 30, 31).map((t) => START_S + t),
			value: Float64Array.of(90, 91, 92, 93, 94)
		},
		{
			kind: 'power',
			tS: Float64Array.of(0, 1, 2, 30, 31).map((t) => START_S + t),
			value: Float64Array.of(0, 200, 210, 0, 220)
		}
	]
};

let folder: string;
let lines: string[];

beforeEach(() => {
	folder = mkdtempSync(join(tmpdir(), 'inspect-'));
	lines = [];
	vi.spyOn(process.stdout, 'write').mockImplementation(
		(text) => (lines.push(...String(text).trimEnd().split('\n')), true)
	);
});

afterEach(() => {
	vi.restoreAllMocks();
	rmSync(folder, { recursive: true });
});

function file(name: string, content: Uint8Array | string): string {
	const path = join(folder, name);
	writeFileSync(path, content);
	return path;
}

describe('nonius inspect', () => {
	it('prints one line a file in the promised shape, with zeros of power not counted', async () => {
		const path = file('strap.fit', writeFit(RIDE));
		expect(await inspect([path])).toBe(0);
		expect(lines).toHaveLength(1);
		expect(JSON.parse(lines[0])).toEqual({
			file: path,
			format: 'fit',
			device: { maker: 'maker 255', product: 'Halden ECG strap', serial: '40217', firmware: '4.12' },
			startedAt: '2024-05-06T12:53:20.000Z',
			durationS: 31,
			channels: [
				{ kind: 'heartRate', n: 5, min: 90, max: 94, medianIntervalS: 1, maxGapS: 28 },
				{ kind: 'power', n: 3, min: 200, max: 220, medianIntervalS: 1, maxGapS: 28 }
			],
			warnings: [{ code: 'gap', message: expect.stringContaining('28 s') }]
		});
	});

	it('goes on after a refused and a missing file and ends with status 1', async () => {
		const bad = file('note.txt', 'the strap is in the box\nthe watch is not\n');
		const good = file('strap.fit', writeFit(RIDE));
		expect(await inspect([bad, join(folder, 'absent.fit'), good])).toBe(1);
		const parsed = lines.map((line) => JSON.parse(line));
		expect(parsed.map((line) => line.error?.code ?? 'read')).toEqual(['no-heart-rate', 'cannot-open', 'read']);
		expect(parsed[0].file).toBe(bad);
		expect(parsed[0].error.message.length).toBeGreaterThan(30);
	});

	it('gives a line for each recording in an archive', async () => {
		const path = file('day.zip', zipSync({ 'a.fit': writeFit(RIDE), 'b.fit': writeFit(RIDE, { bigEndian: true }) }));
		expect(await inspect([path])).toBe(0);
		expect(lines.map((line) => JSON.parse(line).file)).toEqual([`${path}/a.fit`, `${path}/b.fit`]);
	});
});
