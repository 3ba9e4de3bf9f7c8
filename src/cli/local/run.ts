/** Runs a program while signals still reach us, unlike a synchronous call. */
import { spawn } from 'node:child_process';
import { PROJECT_ROOT } from './data-folder';

export interface Outcome {
	/** Exit status; 1 where it was ended by a signal. */
	status: number;
	/** What it wrote to stderr, when asked for. */
	words: string;
	/** The program does not exist. */
	missing: boolean;
}

/**
 * Waits for the program's end. It gets no input.
 * @param options.stdout where its answer goes: ours, our stderr, or nowhere
 * @param options.keepWords keeps what it writes to stderr, instead of passing it on
 */
export function run(file: string, argv: string[], options: { env?: NodeJS.ProcessEnv; cwd?: string; stdout?: 'inherit' | 'stderr' | 'ignore'; keepWords?: boolean } = {}): Promise<Outcome> {
	return new Promise((done) => {
		const child = spawn(file, argv, {
			cwd: options.cwd ?? PROJECT_ROOT,
			env: options.env ?? process.env,
			stdio: ['ignore', options.stdout === 'stderr' ? 2 : (options.stdout ?? 'inherit'), options.keepWords ? 'pipe' : 'inherit']
		});
		let words = '';
		child.stderr?.on('data', (chunk: Buffer) => (words += chunk.toString()));
		child.once('error', (cause: NodeJS.ErrnoException) => done({ status: 1, words: cause.message, missing: cause.code === 'ENOENT' }));
		child.once('close', (code) => done({ status: code ?? 1, words, missing: false }));
	});
}
