/** Runs the built application as a child process that ends with us, however we end. */
import { spawn } from 'node:child_process';
import { get } from 'node:http';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { PROJECT_ROOT } from './data-folder';
import { StopSentence } from './sentence';

export interface RunningServer {
	/** Resolves when the server has ended, with how: "exit status 1", "signal SIGKILL". */
	ended: Promise<string>;
	/** Waits until it answers. @throws StopSentence when it does not */
	ready(): Promise<void>;
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

/** A host to ask when the server listens on this one; the wildcards listen on loopback too. */
function reachableHost(host: string): string {
	if (host === '0.0.0.0') return '127.0.0.1';
	if (host === '::') return '[::1]';
	return host.includes(':') && !host.startsWith('[') ? `[${host}]` : host;
}

/**
 * Starts the server with these settings in its environment. It can be stopped at once, also before it is ready.
 */
export function launchServer(env: Record<string, string | undefined>, options: { quiet?: boolean } = {}): RunningServer {
	const endWithParent = pathToFileURL(join(PROJECT_ROOT, 'src/cli/local/end-with-parent.mjs')).href;
	const child = spawn(process.execPath, ['--import', endWithParent, join(PROJECT_ROOT, 'build/index.js')], {
		cwd: PROJECT_ROOT,
		env: { ...env, NODE_ENV: 'production', SHUTDOWN_TIMEOUT: '3' },
		stdio: ['ignore', options.quiet ? 'ignore' : 'inherit', 'inherit', 'ipc']
	});
	const ended = new Promise<string>((done) => child.once('exit', (code, signal) => done(signal ? `signal ${signal}` : `exit status ${code}`)));
	const hasEnded = () => child.exitCode !== null || child.signalCode !== null;
	return {
		ended,
		async ready() {
			const address = `http://${reachableHost(env.HOST ?? '127.0.0.1')}:${env.PORT}`;
			const deadline = Date.now() + 60_000;
			while (!(await answers(`${address}/healthz`))) {
				if (hasEnded()) throw new StopSentence('The server ended before it answered; its own words are above.');
				if (Date.now() > deadline) throw new StopSentence(`The server did not answer on ${address} within a minute; its own words are above.`);
				await new Promise((r) => setTimeout(r, 100));
			}
		},
		async stop() {
			if (hasEnded()) return;
			child.kill('SIGTERM');
			const late = setTimeout(() => child.kill('SIGKILL'), 8000);
			await ended;
			clearTimeout(late);
		}
	};
}
