import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { addRun, closingLine, playwrightCounts, succeeded, vitestCounts } from './tally';

const none = () => ({ passed: 0, failed: 0, skipped: 0 });
const report = (content: unknown) => {
	const file = join(mkdtempSync(join(tmpdir(), 'nonius-tally-')), 'report.json');
	writeFileSync(file, JSON.stringify(content));
	return file;
};

test('counts of both runners are summed, skipped ones are told', () => {
	const tally = none();
	addRun(tally, 0, vitestCounts(report({ numPassedTests: 7, numFailedTests: 0, numPendingTests: 2 })));
	addRun(tally, 0, playwrightCounts(report({ stats: { expected: 3, unexpected: 0, flaky: 0, skipped: 0 } })));
	expect(closingLine(tally)).toBe('10 passed, 0 failed, 2 skipped');
	expect(succeeded(tally)).toBe(true);
});

test('a runner that crashes without a report is a failure, not a run without failures', () => {
	const tally = none();
	addRun(tally, 1, vitestCounts('/nowhere/report.json'));
	expect(closingLine(tally)).toBe('0 passed, 1 failed');
});

test('a runner that fails although no test did, as with an error between tests, is a failure', () => {
	const tally = none();
	addRun(tally, 1, vitestCounts(report({ numPassedTests: 7, numFailedTests: 0, numPendingTests: 0 })));
	expect(closingLine(tally)).toBe('7 passed, 1 failed');
	expect(succeeded(tally)).toBe(false);
});

test('a runner that found no test is a failure', () => {
	const tally = none();
	addRun(tally, 0, playwrightCounts(report({ stats: { expected: 0, unexpected: 0, flaky: 0, skipped: 0 } })));
	expect(succeeded(tally)).toBe(false);
});

test('a journey that passed only at the second try is a failure', () => {
	const tally = none();
	addRun(tally, 0, playwrightCounts(report({ stats: { expected: 3, unexpected: 0, flaky: 1, skipped: 0 } })));
	expect(closingLine(tally)).toBe('3 passed, 1 failed');
});
