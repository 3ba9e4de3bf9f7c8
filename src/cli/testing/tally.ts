/** Counts of all test runners as one, so that nothing that failed can hide. */
import { existsSync, readFileSync } from 'node:fs';
import { z } from 'zod';

export interface Tally {
	passed: number;
	failed: number;
	skipped: number;
}

const vitestReport = z.object({ numPassedTests: z.number(), numFailedTests: z.number(), numPendingTests: z.number() });
const playwrightReport = z.object({ stats: z.object({ expected: z.number(), unexpected: z.number(), flaky: z.number(), skipped: z.number() }) });

/** Counts in Vitest's JSON report, null where it wrote none. */
export function vitestCounts(file: string): Tally | null {
	const report = parsed(file, vitestReport);
	return report && { passed: report.numPassedTests, failed: report.numFailedTests, skipped: report.numPendingTests };
}

/** Counts in Playwright's JSON report, null where it wrote none. A test that passed only when tried again has failed. */
export function playwrightCounts(file: string): Tally | null {
	const report = parsed(file, playwrightReport);
	return report && { passed: report.stats.expected, failed: report.stats.unexpected + report.stats.flaky, skipped: report.stats.skipped };
}

function parsed<T>(file: string, shape: z.ZodType<T>): T | null {
	return existsSync(file) ? shape.parse(JSON.parse(readFileSync(file, 'utf8'))) : null;
}

/** Adds a runner's counts. One that failed without a failed test (a crash, no report), or that ran nothing, is one failure. */
export function addRun(tally: Tally, status: number, counts: Tally | null): void {
	tally.passed += counts?.passed ?? 0;
	tally.skipped += counts?.skipped ?? 0;
	tally.failed += counts?.failed ?? 0;
	const ranNothing = !counts || counts.passed + counts.failed === 0;
	if (ranNothing || (status !== 0 && counts.failed === 0)) tally.failed++;
}

export function closingLine({ passed, failed, skipped }: Tally): string {
	return `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`;
}

export const succeeded = ({ passed, failed }: Tally): boolean => failed === 0 && passed > 0;
