/** Runs the built application as a child process that ends with us, however we end. */
import { spawn, type ChildProcess } from 'node:child_process';
import { get } from 'node:http';
import { join } from 'node:path';
import { PROJECT_ROOT } from './data-folder';
import { StopSentence } from './sentence';

export interface RunningServer {
	process: ChildProcess;
	/** Resolves when the server has ended by itself. */
	ended: Promise<number | null>;
	stop(): Promise<void>;
}

/** Asked over node:http, since fetch refuses some ports that a server may well have. */
function answers(address: string): Promise<boolean> {
	return new Promise((done) => {
		const request = get(address, { timeout: 3000 }, (answer) => {
			answer.resume();
			done(answer.statusCode === 200);
		});
		request.on('timeout', () => request.destroy());
		request.on('error', () => done(false));
	});
}

/** Starts the server with these settings in its environment and waits until it answers. */
export async function startServer(env: Record<string, string | undefined>, options: { quiet?: boolean } = {}): Promise<RunningServer> {
	const child = spawn(process.execPath, ['--import', join(PROJECT_ROOT, 'src/cli/local/end-with-parent.mjs'), join(PROJECT_ROOT, 'build/index.js')], {
		cwd: PROJECT_ROOT,
		env: { ...env, NODE_ENV: 'production', SHUTDOWN_TIMEOUT: '5' },
		stdio: ['ignore', options.quiet ? 'ignore' : 'inherit', 'inherit', 'ipc']
	});
	const ended = new Promise<number | null>((done) => child.once('exit', (code) => done(code)));
	const address = `http://${env.HOST === '0.0.0.0' ? '127.0.0.1' : (env.HOST ?? '127.0.0.1')}:${env.PORT}`;
	const deadline = Date.now() + 60_000;
	let gone = false;
	ended.then(() => (gone = true));
	for (;;) {
		if (gone) throw new StopSentence(`The server ended before it answered. Is port ${env.PORT} taken? Set PORT to another one; its own words are above.`);
		if (await answers(`${address}/healthz`)) break;
		if (Date.now() > deadline) {
			child.kill('SIGKILL');
			throw new StopSentence(`The server did not answer on ${address} within a minute; its own words are above.`);
		}
		await new Promise((r) => setTimeout(r, 100));
	}
	return {
		process: child,
		ended,
		async stop() {
			if (gone) return;
			child.kill('SIGTERM');
			const late = setTimeout(() => child.kill('SIGKILL'), 8000);
			await ended;
			clearTimeout(late);
		}
	};
}
