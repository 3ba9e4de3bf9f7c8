import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readFile } from '../../lib/formats';
import { sampleFiles } from './sample';

const FOLDER = join('fixtures', 'sample-session');

describe('the sample session', () => {
	it('in the checkout is what the script makes, byte for byte', () => {
		for (const { fileName, bytes } of sampleFiles()) expect(Buffer.compare(readFileSync(join(FOLDER, fileName)), bytes), fileName).toBe(0);
	});
	it('is read without a refusal, all three over the same half hour', () => {
		const read = sampleFiles().map(({ fileName, bytes }) => readFile(bytes, fileName));
		const spans = read.map((r) => (r.ok ? [r.recording.startS, r.recording.endS] : [0, 0]));
		expect(Math.max(...spans.map((s) => s[0]))).toBeLessThan(Math.min(...spans.map((s) => s[1])));
		expect(read.map((r) => (r.ok ? r.recording.format : r.refusal.message))).toEqual(['fit', 'tcx', 'csv']);
	});
});
