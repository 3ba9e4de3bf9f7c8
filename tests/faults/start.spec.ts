/** The real start command: killed the hard way, it starts again with nothing lost. */
import { spawn, type ChildProcess } from 'node:child_process';
import { chmodSync, existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { get } from 'node:http';
import { createServer } from 'node:net';
import { join } from 'node:path';
import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { PROJECT_ROOT } from '../../src/cli/local/data-folder';
import { freePort } from '../../src/cli/local/free-port';
import { startCluster } from '../../src/cli/local/postgres';

// Below /var/tmp and open to enter, since the postgres user has to get there.
const folder = mkdtempSync('/var/tmp/nonius-start-');
chmodSync(folder, 0o755);
let port: number;
let running: ChildProcess | null = null;

const BOOTSTRAP = join(PROJECT_ROOT, 'src/cli/bootstrap.mjs');

interface Started {
	process: ChildProcess;
	output(): string;
	ended: Promise<number | null>;
}

function start(env: Record<string, string> = {}, [file, ...argv]: string[] = [process.execPath, BOOTSTRAP, 'start']): Started {
	// Demo content is left out: what is tested here is that data stays, whoever made it.
	const child = spawn(file, argv, {
		cwd: PROJECT_ROOT,
		env: { ...process.env, NODE_ENV: '', NONIUS_DATA: folder, PORT: String(port), NONIUS_DEMO: '0', DATABASE_URL: '', ...env },
		stdio: ['ignore', 'pipe', 'pipe']
	});
	let text = '';
	child.stdout.on('data', (d) => (text += d));
	child.stderr.on('data', (d) => (text += d));
	running = child;
	return { process: child, output: () => text, ended: new Promise((done) => child.once('exit', (code) => done(code))) };
}

async function until(what: () => boolean | Promise<boolean>, started: Started, seconds = 120): Promise<void> {
	const end = Date.now() + seconds * 1000;
	while (!(await what())) {
		if (Date.now() > end || started.process.exitCode !== null) throw new Error(`Did not come about. It said:\n${started.output()}`);
		await new Promise((r) => setTimeout(r, 100));
	}
}

const ready = (s: Started) => until(() => s.output().includes('Nonius is ready'), s);
const answers = () =>
	new Promise<boolean>((done) => {
		get(`http://127.0.0.1:${port}/healthz`, (r) => {
			r.resume();
			done(r.statusCode === 200);
		}).on('error', () => done(false));
	});

async function withDatabase<T>(work: (sql: postgres.Sql) => Promise<T>): Promise<T> {
	const cluster = await startCluster(join(folder, 'postgres'), () => {});
	const sql = postgres(cluster.url('nonius'), { max: 1, onnotice: () => {} });
	try {
		return await work(sql);
	} finally {
		await sql.end();
	}
}

beforeAll(async () => {
	port = await freePort();
});
afterAll(async () => {
	running?.kill('SIGKILL');
	await (await startCluster(join(folder, 'postgres'), () => {})).stop();
	rmSync(folder, { recursive: true, force: true });
});

describe('the start command', { timeout: 180_000 }, () => {
	test('starts, is stopped by Ctrl-C with all its parts, and keeps what was saved', async () => {
		const first = start();
		await ready(first);
		expect(await answers()).toBe(true);
		await withDatabase((sql) => sql`insert into team (name, slug) values ('Kept Bench', 'kept-bench')`);
		first.process.kill('SIGINT');
		expect(await first.ended).toBe(0);
		expect(await answers()).toBe(false);
		expect(existsSync(join(folder, 'postgres/cluster/PG_VERSION'))).toBe(true);
		expect(existsSync(join(folder, 'postgres/cluster/postmaster.pid'))).toBe(false);
	});

	test('stopped in the middle of starting leaves nothing running', async () => {
		const first = start();
		await until(() => existsSync(join(folder, 'start.pid')), first);
		first.process.kill('SIGTERM');
		expect(await first.ended).toBe(0);
		expect(existsSync(join(folder, 'postgres/cluster/postmaster.pid'))).toBe(false);
		expect(existsSync(join(folder, 'start.pid'))).toBe(false);
	});

	test('started twice in the same moment runs once, and the other says so', async () => {
		const both = [start(), start()];
		const loser = await Promise.race(both.map((one) => one.ended.then(() => one)));
		const winner = both.find((one) => one !== loser) ?? both[0];
		expect(loser.output()).toContain('already running on this data folder');
		expect(loser.process.exitCode).toBe(1);
		await ready(winner);
		winner.process.kill('SIGINT');
		expect(await winner.ended).toBe(0);
	});

	test('the shell that npm started us with is killed: everything is stopped, and a new start gets the folder', async () => {
		const first = start({ npm_lifecycle_event: 'start' }, ['sh', '-c', `"${process.execPath}" "${BOOTSTRAP}" start; true`]);
		await ready(first);
		first.process.kill('SIGKILL');
		const second = start();
		await ready(second);
		expect(await answers()).toBe(true);
		second.process.kill('SIGINT');
		expect(await second.ended).toBe(0);
	});

	test('killed by kill -9, takes its server along and starts again with nothing lost', async () => {
		const first = start();
		await ready(first);
		await withDatabase((sql) => sql`insert into team (name, slug) values ('Second Bench', 'second-bench')`);
		first.process.kill('SIGKILL');
		await first.ended;
		await until(async () => !(await answers()), { ...first, process: { exitCode: null } as ChildProcess }, 20);
		expect(existsSync(join(folder, 'start.pid'))).toBe(true);
		const again = start();
		await ready(again);
		const slugs = await withDatabase((sql) => sql`select slug from team order by slug`);
		expect(slugs.map((r) => r.slug)).toEqual(['kept-bench', 'second-bench']);
		again.process.kill('SIGINT');
		await again.ended;
	});

	test('starts on a database whose server was killed and left its pid file', async () => {
		const cluster = await startCluster(join(folder, 'postgres'), () => {});
		const pid = Number(readFileSync(join(cluster.folder, 'cluster/postmaster.pid'), 'utf8').split('\n')[0]);
		process.kill(pid, 'SIGKILL');
		await new Promise((r) => setTimeout(r, 500));
		expect(existsSync(join(cluster.folder, 'cluster/postmaster.pid'))).toBe(true);
		const started = start();
		await ready(started);
		expect((await withDatabase((sql) => sql`select slug from team order by slug`)).map((r) => r.slug)).toEqual(['kept-bench', 'second-bench']);

		started.process.kill('SIGINT');
		await started.ended;
	});

	test('the database is killed while people work: it comes back under the running server', async () => {
		const started = start();
		await ready(started);
		const pid = Number(readFileSync(join(folder, 'postgres/cluster/postmaster.pid'), 'utf8').split('\n')[0]);
		process.kill(pid, 'SIGKILL');
		await until(() => started.output().includes('The database is back'), started);
		await until(answers, started);
		expect((await withDatabase((sql) => sql`select slug from team order by slug`)).map((r) => r.slug)).toEqual(['kept-bench', 'second-bench']);
		started.process.kill('SIGINT');
		expect(await started.ended).toBe(0);
	});

	test('a port that another program has is named before anything is started', async () => {
		const other = createServer();
		await new Promise<void>((done) => other.listen(port, '127.0.0.1', done));
		const started = start();
		expect(await started.ended).toBe(1);
		expect(started.output()).toContain(`Port ${port} on 127.0.0.1 is taken`);
		await new Promise((done) => other.close(done));
	});

	test.each([
		[{ DATABASE_URL: 'postgres://nobody:x@127.0.0.1:1/none' }, 'SMTP_URL is not set'],
		[{ DATABASE_URL: 'postgres://nobody:x@127.0.0.1:1/none', SMTP_URL: 'smtp://127.0.0.1:25', ORIGIN: 'https://nonius.example', AUTH_SECRET: 'x'.repeat(40) }, 'cannot be used (connect ECONNREFUSED 127.0.0.1:1)'],
		[{ PORT: 'many' }, 'PORT must be'],
		[{ HOST: '0.0.0.0' }, 'ORIGIN is not set'],
		[{ NONIUS_DEMO: '1', ORIGIN: 'https://nonius.example' }, 'works on loopback only']
	])('a missing or wrong setting stops it with one sentence', async (env, sentence) => {
		const started = start(env as Record<string, string>);
		expect(await started.ended).toBe(1);
		expect(started.output()).toContain(sentence);
		expect(started.output()).not.toMatch(/^\s+at /m);
	});
});
