/**
 * `npm run fuzz`: damages files by seed and reads them. Every one must be read or refused with a sentence: no exception,
 * no more than 5 s, no unbounded memory.
 *
 * Options: `--runs 20000`, `--seed 1`, `--files ../shared/files`. A finding prints seed and number, which repeat it.
 */
import { fork } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { readFiles } from '../lib/formats';
import { brokenPromises } from './fuzzing/check-reading';
import { generatedFiles, harmfulFiles, realFiles, type CorpusFile } from './fuzzing/corpus';
import { mutate, seededRandom } from './fuzzing/mutate';

const LONGEST_MS = 5000;
const MOST_MEMORY_BYTES = 1_500_000_000;

export interface FuzzOutcome {
	runs: number;
	read: number;
	refused: number;
	slowestMs: number;
	findings: string[];
}

/**
 * Reads damaged copies of the files of a corpus.
 *
 * @param corpus sound files
 * @param options how many, from which seed; `onProgress` is called after each
 */
export function fuzzReaders(
	corpus: CorpusFile[],
	options: { runs: number; seed: number; onProgress?: (run: number) => void }
): FuzzOutcome {
	const outcome: FuzzOutcome = { runs: 0, read: 0, refused: 0, slowestMs: 0, findings: [] };
	const contents = corpus.map((file) => file.bytes);
	for (let run = 0; run < options.runs; run++) {
		// A seed of its own for each run lets a finding be repeated alone.
		const random = seededRandom(options.seed * 1_000_003 + run);
		const file = corpus[Math.floor(random() * corpus.length)];
		tryReading(
			{ name: file.name, bytes: mutate(file.bytes, contents, random) },
			`seed ${options.seed} run ${run}`,
			outcome
		);
		options.onProgress?.(run);
	}
	return outcome;
}

/** Reads one file and notes what came of it. */
export function tryReading(file: CorpusFile, label: string, outcome: FuzzOutcome): void {
	outcome.runs++;
	// Processor time, not the clock on the wall: other work on the machine is no fault of the readers.
	const begin = process.cpuUsage();
	try {
		const readings = readFiles(file.bytes, file.name, { nowS: 1_750_000_000, maxUnpackedBytes: 50_000_000 });
		for (const promise of brokenPromises(readings)) outcome.findings.push(`${label} (${file.name}): ${promise}`);
		if (readings.some(({ reading }) => reading.ok)) outcome.read++;
		else outcome.refused++;
	} catch (error) {
		outcome.findings.push(
			`${label} (${file.name}): ${error instanceof Error ? (error.stack ?? error.message) : String(error)}`
		);
	}
	const used = process.cpuUsage(begin);
	const ms = (used.user + used.system) / 1000;
	outcome.slowestMs = Math.max(outcome.slowestMs, ms);
	if (ms > LONGEST_MS) outcome.findings.push(`${label} (${file.name}): took ${Math.round(ms)} ms`);
}

interface FuzzOptions {
	runs: number;
	seed: number;
	files: string;
}

function optionsOf(args: string[]): FuzzOptions {
	const value = (name: string, fallback: string) => {
		const at = args.indexOf(`--${name}`);
		return at >= 0 && args[at + 1] !== undefined ? args[at + 1] : fallback;
	};
	return {
		runs: Number(value('runs', '20000')),
		seed: Number(value('seed', '1')),
		files: value('files', '../shared/files')
	};
}

/**
 * Runs the command: a child process does the reading, so that one that hangs can be ended and told.
 *
 * @param args options as in the head of this file
 * @returns exit status: 0 without findings, 1 with, 2 for wrong options
 */
export async function fuzz(args: string[]): Promise<number> {
	const { runs, seed } = optionsOf(args);
	if (!Number.isInteger(runs) || runs < 1 || !Number.isInteger(seed)) {
		process.stderr.write('Usage: fuzz [--runs 20000] [--seed 1] [--files FOLDER]\n');
		return 2;
	}
	return new Promise((resolve) => {
		const child = fork(fileURLToPath(import.meta.url), args, { env: { ...process.env, NONIUS_FUZZ_CHILD: '1' }, execArgv: ['--import', 'tsx', ...process.execArgv.filter((a) => !a.includes('tsx'))] });
		let last = -1;
		let timer: NodeJS.Timeout | undefined;
		const watch = () => {
			clearTimeout(timer);
			timer = setTimeout(() => {
				process.stderr.write(`Seed ${seed} run ${last + 1} does not end. It was stopped after 60 s.\n`);
				child.kill('SIGKILL');
			}, 60_000);
		};
		watch();
		child.on('message', (message) => {
			if (typeof message === 'number') last = message;
			watch();
		});
		child.on('exit', (code) => {
			clearTimeout(timer);
			if (code === null) process.stderr.write(`The readers ended early, after seed ${seed} run ${last}.\n`);
			resolve(code === 0 ? 0 : 1);
		});
	});
}

function runChild(args: string[]): void {
	const { runs, seed, files } = optionsOf(args);
	const corpus = [...generatedFiles(), ...realFiles(files, 400_000)];
	const harmed: FuzzOutcome = { runs: 0, read: 0, refused: 0, slowestMs: 0, findings: [] };
	for (const file of harmfulFiles(100_000_000)) tryReading(file, 'made to do harm', harmed);
	process.stdout.write(
		`${harmed.runs} files made to do harm: ${harmed.refused} refused, ${harmed.read} read, slowest ${Math.round(harmed.slowestMs)} ms\n`
	);
	const outcome = fuzzReaders(corpus, {
		runs,
		seed,
		onProgress: (run) => {
			if (run % 50 === 0) process.send?.(run);
			if (run > 0 && run % 5000 === 0) process.stdout.write(`${run} of ${runs}\n`);
		}
	});
	const findings = [...harmed.findings, ...outcome.findings];
	const peak = process.resourceUsage().maxRSS * 1024;
	if (peak > MOST_MEMORY_BYTES) findings.push(`memory reached ${Math.round(peak / 1e6)} MB`);
	process.stdout.write(
		`${outcome.runs} damaged copies of ${corpus.length} files: ${outcome.read} read, ${outcome.refused} refused, slowest ${Math.round(outcome.slowestMs)} ms, memory at most ${Math.round(peak / 1e6)} MB, ${findings.length} findings\n`
	);
	for (const finding of findings.slice(0, 20)) process.stdout.write(`${finding}\n`);
	process.exitCode = findings.length === 0 ? 0 : 1;
}

if (process.env.NONIUS_FUZZ_CHILD === '1' && process.send) {
	runChild(process.argv.slice(2));
	process.disconnect();
}

/** Entry of `npm run fuzz`. */
export const main = fuzz;
