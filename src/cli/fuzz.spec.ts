import { describe, expect, it } from 'vitest';
import { generatedFiles, harmfulFiles } from './fuzzing/corpus';
import { fuzzReaders, tryReading, type FuzzOutcome } from './fuzz';

describe('damaged files', () => {
	it('the sound ones are all read', () => {
		const outcome: FuzzOutcome = { runs: 0, read: 0, refused: 0, slowestMs: 0, findings: [] };
		for (const file of generatedFiles()) tryReading(file, 'sound', outcome);
		expect(outcome.findings).toEqual([]);
		expect(outcome.refused).toBe(0);
	});

	it('600 damaged copies are read or refused with a sentence, none breaks a reader', () => {
		const outcome = fuzzReaders(generatedFiles(), { runs: 600, seed: 7 });
		expect(outcome.findings).toEqual([]);
		expect(outcome.runs).toBe(600);
	});

	it('files made to do harm are met with a sentence', () => {
		const outcome: FuzzOutcome = { runs: 0, read: 0, refused: 0, slowestMs: 0, findings: [] };
		for (const file of harmfulFiles(2_000_000)) tryReading(file, 'harmful', outcome);
		expect(outcome.findings).toEqual([]);
	});
});
