/**
 * `npm test`: every check from lint to the journeys in a real browser, with everything they need set up first.
 * Ends with `N passed, N failed` and fails when anything did.
 *
 * `npm test -- --only unit,integration` runs some of the parts: check, unit, integration, e2e.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ensureBuilt } from './local/build';
import { ensureChromium } from './local/chromium';
import { dataFolder, PROJECT_ROOT } from './local/data-folder';
import { ensureDatabase } from './local/local-parts';
import { startCluster } from './local/postgres';
import { StopSentence } from './local/sentence';

const PARTS = ['check', 'unit', 'integration', 'e2e'] as const;
type Part = (typeof PARTS)[number];

/** The migrated database from which every integration test copies its own. */
export const TEMPLATE = 'nonius_test_template';

interface Tally {
	passed: number;
	failed: number;
	skipped: number;
}

export async function main(args: string[]): Promise<number> {
	const only = args[0] === '--only' ? (args[1] ?? '').split(',') : [...PARTS];
	const unknown = only.filter((p) => !PARTS.includes(p as Part));
	if (unknown.length > 0 || (args.length > 0 && args[0] !== '--only')) {
		console.error(`npm test takes --only with some of: ${PARTS.join(', ')}.`);
		return 2;
	}
	const wants = (part: Part) => only.includes(part);
	const tally: Tally = { passed: 0, failed: 0, skipped: 0 };
	const folder = join(dataFolder(), 'test');
	let stopCluster = () => {};
	process.on('SIGINT', () => {
		stopCluster();
		process.exit(130);
	});
	try {
		if (wants('check')) {
			step(tally, 'Lint', ['node_modules/eslint/bin/eslint.js', '.', '--max-warnings', '0']);
			step(tally, 'Directions between rooms', ['node_modules/dependency-cruiser/bin/dependency-cruise.mjs', 'src', '--config', '.dependency-cruiser.cjs', '--output-type', 'err']);
			step(tally, 'Sync', ['node_modules/@sveltejs/kit/svelte-kit.js', 'sync']);
			step(tally, 'Types', ['node_modules/svelte-check/bin/svelte-check', '--tsconfig', './tsconfig.json', '--fail-on-warnings', '--output', 'human']);
		}
		if (wants('unit')) vitest(tally, 'unit', {});
		if (wants('integration') || wants('e2e')) {
			const cluster = await startCluster(join(folder, 'postgres'), say);
			stopCluster = () => cluster.stop();
			const env = { TEST_DATABASE_URL: cluster.baseUrl, TEST_DATABASE_TEMPLATE: TEMPLATE };
			await ensureDatabase(cluster, TEMPLATE);
			// The start command is tested as it is used, so the build comes first.
			ensureBuilt(say);
			if (wants('integration')) vitest(tally, 'integration', env);
			if (wants('e2e')) {
				const chromium = ensureChromium(say);
				playwright(tally, { ...env, NONIUS_CHROMIUM: chromium });
			}
		}
	} catch (cause) {
		if (!(cause instanceof StopSentence)) throw cause;
		console.error(cause.message);
		tally.failed++;
	} finally {
		stopCluster();
	}
	console.log(`${tally.passed} passed, ${tally.failed} failed${tally.skipped ? `, ${tally.skipped} skipped` : ''}`);
	return tally.failed > 0 || tally.passed === 0 ? 1 : 0;
}

function say(words: string): void {
	console.log(`\n— ${words}`);
}

function run(argv: string[], env: Record<string, string> = {}): number {
	const began = Date.now();
	const { status } = spawnSync(process.execPath, argv, { cwd: PROJECT_ROOT, stdio: ['ignore', 'inherit', 'inherit'], env: { ...process.env, FORCE_COLOR: '0', ...env } });
	console.log(`  ${((Date.now() - began) / 1000).toFixed(0)} s`);
	return status ?? 1;
}

function step(tally: Tally, words: string, argv: string[]): void {
	say(words);
	if (run(argv) === 0) tally.passed++;
	else tally.failed++;
}

function vitest(tally: Tally, project: 'unit' | 'integration', env: Record<string, string>): void {
	say(project === 'unit' ? 'Unit tests' : 'Integration tests against PostgreSQL');
	const report = join(dataFolder(), `vitest-${project}.json`);
	rmSync(report, { force: true });
	const status = run(['node_modules/vitest/vitest.mjs', 'run', '--project', project, '--reporter', 'default', '--reporter', 'json', '--outputFile.json', report], env);
	const counts = existsSync(report) ? (JSON.parse(readFileSync(report, 'utf8')) as { numPassedTests: number; numFailedTests: number; numPendingTests: number; numTotalTests: number }) : null;
	count(tally, status, counts && { passed: counts.numPassedTests, failed: counts.numFailedTests, skipped: counts.numPendingTests });
}

function playwright(tally: Tally, env: Record<string, string>): void {
	say('Journeys in the browser');
	const report = join(dataFolder(), 'playwright.json');
	rmSync(report, { force: true });
	const status = run(['node_modules/@playwright/test/cli.js', 'test', '--reporter', 'list,json'], { ...env, PLAYWRIGHT_JSON_OUTPUT_NAME: report });
	const counts = existsSync(report) ? (JSON.parse(readFileSync(report, 'utf8')) as { stats: { expected: number; unexpected: number; flaky: number; skipped: number } }).stats : null;
	count(tally, status, counts && { passed: counts.expected, failed: counts.unexpected + counts.flaky, skipped: counts.skipped });
}

/** A run that failed without a failed test (a crash, no report) is one failure. */
function count(tally: Tally, status: number, counts: Tally | null): void {
	tally.passed += counts?.passed ?? 0;
	tally.skipped += counts?.skipped ?? 0;
	tally.failed += counts?.failed ?? 0;
	if (!counts || (status !== 0 && counts.failed === 0)) tally.failed++;
}
