/**
 * `npm test`: every check from lint to the journeys in a real browser, with everything they need set up first.
 * Ends with `N passed, N failed` and fails when anything did.
 *
 * `npm test -- --only unit,integration` runs some of the parts: check, unit, integration, e2e.
 */
import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { whenAbandoned } from './local/abandoned';
import { ensureBuilt } from './local/build';
import { ensureChromium } from './local/chromium';
import { dataFolder, makeFolder } from './local/data-folder';
import { dropDatabases, ensureDatabase } from './local/local-parts';
import { takeLock } from './local/lock';
import { startCluster, type Cluster } from './local/postgres';
import { run } from './local/run';
import { RunningParts } from './local/running-parts';
import { StopSentence } from './local/sentence';
import { addRun, closingLine, playwrightCounts, succeeded, vitestCounts, type Tally } from './testing/tally';

const PARTS = ['check', 'unit', 'integration', 'e2e'] as const;
type Part = (typeof PARTS)[number];

/** Databases of tests begin so: the migrated one from which every test copies its own, and those copies. */
const TEST_DATABASES = 'nonius_test_';
const TEMPLATE = `${TEST_DATABASES}template`;

export async function main(args: string[]): Promise<number> {
	const chosen = partsOf(args);
	if (chosen === null) {
		console.error(`npm test takes --only with some of: ${PARTS.join(', ')}. Example: npm test -- --only unit,integration`);
		return 2;
	}
	const parts = new RunningParts();
	const end = (status: number) => void parts.stopAll().then(() => process.exit(status));
	for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => end(130));
	whenAbandoned('test', () => end(130));

	const tally: Tally = { passed: 0, failed: 0, skipped: 0 };
	const began = Date.now();
	try {
		await runParts(chosen, tally, parts);
	} catch (cause) {
		// Broken off by a signal: the process ends when everything is stopped.
		if (parts.ending) await new Promise(() => undefined);
		if (!(cause instanceof StopSentence)) throw cause;
		console.error(cause.message);
		tally.failed++;
	} finally {
		await parts.stopAll();
	}
	console.log(`\n${((Date.now() - began) / 60_000).toFixed(1)} min`);
	console.log(closingLine(tally));
	return succeeded(tally) ? 0 : 1;
}

function partsOf(args: string[]): Part[] | null {
	if (args.length === 0) return [...PARTS];
	const named = args[0] === '--only' && args.length === 2 ? args[1].split(',') : [];
	const known = PARTS.filter((part) => named.includes(part));
	return known.length > 0 && known.length === named.length ? known : null;
}

async function runParts(chosen: Part[], tally: Tally, parts: RunningParts): Promise<void> {
	const folder = makeFolder(join(dataFolder(), 'test'));
	await parts.start(
		() => takeLock(join(folder, 'test.pid'), { waiting: 'Another npm test is at work here; waiting a moment for it to end …', held: (pid) => `Tests are already running on this data folder (process ${pid}). Wait until they have ended, or set NONIUS_DATA to another folder.` }, say),
		(giveBack) => giveBack()
	);
	if (chosen.includes('check')) {
		await step(tally, 'Lint', ['node_modules/eslint/bin/eslint.js', '.', '--max-warnings', '0']);
		await step(tally, 'Directions between rooms', ['node_modules/dependency-cruiser/bin/dependency-cruise.mjs', 'src', '--config', '.dependency-cruiser.cjs', '--output-type', 'err']);
		await step(tally, 'Generated types', ['node_modules/@sveltejs/kit/svelte-kit.js', 'sync']);
		await step(tally, 'Types', ['node_modules/svelte-check/bin/svelte-check', '--tsconfig', './tsconfig.json', '--fail-on-warnings', '--output', 'human']);
	}
	if (chosen.includes('unit')) await vitest(tally, folder, 'unit', {});
	if (!chosen.includes('integration') && !chosen.includes('e2e')) return;

	const cluster = await parts.start(() => startCluster(join(folder, 'postgres'), say, { throwAway: true }), (c) => c.stop());
	const env = await freshTemplate(cluster);
	// The start command is tested as it is used, so the build comes first.
	await ensureBuilt(say);
	if (chosen.includes('integration')) await vitest(tally, folder, 'integration', env);
	if (chosen.includes('e2e')) await playwright(tally, folder, { ...env, NONIUS_CHROMIUM: await ensureChromium(say) });
}

/** The template is made anew: one of an earlier run may have been made by other migrations. */
async function freshTemplate(cluster: Cluster): Promise<Record<string, string>> {
	await dropDatabases(cluster, TEST_DATABASES);
	await ensureDatabase(cluster, TEMPLATE);
	return { TEST_DATABASE_URL: cluster.baseUrl, TEST_DATABASE_TEMPLATE: TEMPLATE };
}

function say(words: string): void {
	console.log(`\n— ${words}`);
}

async function timed(argv: string[], env: Record<string, string> = {}): Promise<number> {
	const began = Date.now();
	const colour: Record<string, string> = process.stdout.isTTY ? {} : { NO_COLOR: '1' };
	const { status } = await run(process.execPath, argv, { env: { ...process.env, ...colour, ...env } });
	console.log(`  ${((Date.now() - began) / 1000).toFixed(0)} s`);
	return status;
}

async function step(tally: Tally, words: string, argv: string[]): Promise<void> {
	say(words);
	if ((await timed(argv)) === 0) tally.passed++;
	else tally.failed++;
}

async function vitest(tally: Tally, folder: string, project: 'unit' | 'integration', env: Record<string, string>): Promise<void> {
	say(project === 'unit' ? 'Unit tests' : 'Integration and fault tests against PostgreSQL');
	const report = freshReport(folder, `vitest-${project}.json`);
	const status = await timed(['node_modules/vitest/vitest.mjs', 'run', '--project', project, '--reporter', 'default', '--reporter', 'json', '--outputFile.json', report], env);
	addRun(tally, status, vitestCounts(report));
}

async function playwright(tally: Tally, folder: string, env: Record<string, string>): Promise<void> {
	say('Journeys in the browser');
	const report = freshReport(folder, 'playwright.json');
	const status = await timed(['node_modules/@playwright/test/cli.js', 'test', '--reporter', 'list,json'], { ...env, PLAYWRIGHT_JSON_OUTPUT_NAME: report });
	addRun(tally, status, playwrightCounts(report));
}

function freshReport(folder: string, name: string): string {
	const file = join(folder, name);
	rmSync(file, { force: true });
	return file;
}
