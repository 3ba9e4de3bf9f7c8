/** `npm start`: everything from the database to the printed address; Ctrl-C stops all of it. */
import { join } from 'node:path';
import { openDatabase } from '../lib/server/db/client';
import { teams } from '../lib/server/db/schema';
import { isLoopback, loadSettings, SettingsError, type Settings } from '../lib/server/settings';
import { whenAbandoned } from './local/abandoned';
import { ensureBuilt } from './local/build';
import { dataFolder } from './local/data-folder';
import { deployed } from './local/deployment';
import { portToListenOn } from './local/free-port';
import { keepRunning } from './local/keep-running';
import { ensureDatabase, localSecret } from './local/local-parts';
import { takeLock } from './local/lock';
import { startMailCatcher } from './local/mail-catcher';
import { startCluster } from './local/postgres';
import { RunningParts } from './local/running-parts';
import { StopSentence } from './local/sentence';
import { launchServer } from './local/server';
import { environmentOf } from './local/server-environment';

const say = (words: string) => console.log(words);

export async function main(args: string[]): Promise<number> {
	if (args.length > 0) {
		console.error(`npm start takes no options, so not "${args[0]}" either. Settings come from the environment: README.md lists them.`);
		return 2;
	}
	const parts = new RunningParts();
	const end = (status: number) => {
		if (!parts.ending) say('\nStopping …');
		void parts.stopAll().then(() => process.exit(status));
	};
	for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => end(0));
	// A terminal that is gone takes no more words; that must not keep the parts from being stopped.
	for (const stream of [process.stdout, process.stderr]) stream.on('error', () => {});
	whenAbandoned('start', () => end(0));

	try {
		const began = Date.now();
		const settings = process.env.DATABASE_URL ? await deployed(process.env) : await local(parts, end);
		if (settings.demo) await ensureDemo(settings.databaseUrl);
		await ensureBuilt(say);
		await portToListenOn(settings.host, settings.port, say);
		const server = await parts.start(async () => launchServer(environmentOf(settings)), (s) => s.stop());
		await server.ready();
		await announce(settings, Date.now() - began);
		const how = await server.ended;
		if (!parts.ending) console.error(`The server ended by itself (${how}). Start again: nothing that was saved is lost.`);
		const ended = parts.ending ? 0 : 1;
		await parts.stopAll();
		return ended;
	} catch (cause) {
		// What breaks off because everything is being stopped is no news.
		const stopped = parts.ending;
		await parts.stopAll();
		if (stopped) return 0;
		return failure(cause);
	}
}

function failure(cause: unknown): number {
	if (!(cause instanceof StopSentence) && !(cause instanceof SettingsError)) throw cause;
	console.error(cause.message);
	return 1;
}

/** Everything local: cluster, mail catcher, secret, demo content. What is given in the environment replaces its part. */
async function local(parts: RunningParts, end: (status: number) => void): Promise<Settings> {
	const folder = dataFolder();
	const host = process.env.HOST || '127.0.0.1';
	const onLoopback = isLoopback(host);
	const port = process.env.PORT || '4180';
	const settingsWith = (databaseUrl: string, smtpUrl: string) =>
		loadSettings({
			...process.env,
			PORT: port,
			HOST: host,
			DATABASE_URL: databaseUrl,
			SMTP_URL: process.env.SMTP_URL || smtpUrl,
			// Off loopback only the operator knows under which address people come.
			ORIGIN: process.env.ORIGIN || (onLoopback ? `http://${host.includes(':') && !host.startsWith('[') ? `[${host}]` : host}:${port}` : undefined),
			AUTH_SECRET: process.env.AUTH_SECRET || localSecret(folder),
			NONIUS_DATA: folder,
			NONIUS_DEMO: process.env.NONIUS_DEMO || (onLoopback && !process.env.ORIGIN ? '1' : '0')
		});
	// What was given is judged before anything is started.
	const judged = settingsWith('postgres://127.0.0.1/nonius', 'smtp://127.0.0.1');
	await parts.start(
		() =>
			takeLock(
				join(folder, 'start.pid'),
				{
					waiting: `Another start holds the data folder ${folder}; waiting a moment for it to end …`,
					held: (pid) => `Nonius is already running on this data folder (process ${pid}). Stop it with Ctrl-C there, or set NONIUS_DATA to another folder and PORT to another number.`
				},
				say
			),
		(giveBack) => giveBack()
	);
	await portToListenOn(judged.host, judged.port, say);

	const startDatabase = () => startCluster(join(folder, 'postgres'), say);
	const cluster = await parts.start(startDatabase, (c) => c.stop());
	const databaseUrl = await ensureDatabase(cluster, 'nonius');
	await parts.start(
		async () =>
			keepRunning(cluster, startDatabase, say, (cause) => {
				console.error(cause instanceof Error ? cause.message : String(cause));
				end(1);
			}),
		(endWatch) => endWatch()
	);
	if (process.env.SMTP_URL) return settingsWith(databaseUrl, '');
	const catcher = await parts.start(
		() => startMailCatcher(join(folder, 'mail'), (mail) => say(`Mail for ${mail.to}: ${mail.subject}${mail.link ? `\n  ${mail.link}` : ''}`)),
		(c) => c.stop()
	);
	return settingsWith(databaseUrl, catcher.smtpUrl);
}

/** Demo content, once, in an empty database. */
async function ensureDemo(databaseUrl: string): Promise<void> {
	const { db, close } = openDatabase(databaseUrl);
	try {
		if ((await db.select({ id: teams.id }).from(teams).limit(1)).length > 0) return;
		say('Making the demo study: simulated sessions through the real import …');
		const { seedDemo } = await import('./seed');
		await seedDemo(db);
	} finally {
		await close();
	}
}

async function announce(settings: Settings, tookMs: number): Promise<void> {
	say(`\nNonius is ready at ${settings.origin} (${(tookMs / 1000).toFixed(1)} s)`);
	if (settings.demo) {
		const { demoPeople } = await import('../lib/server/auth/demo');
		const { db, close } = openDatabase(settings.databaseUrl, { max: 1 });
		const people = await demoPeople(db).finally(close);
		say('\nDemo people. One click on the sign-in page signs in as any of them; or ask there for a link to the address:');
		for (const p of people) say(`  ${p.initials.padEnd(3)} ${p.role.padEnd(12)} ${p.name.padEnd(14)} ${p.email}`);
	} else say(`Sign in with a link by mail${settings.oidc ? `, or through ${settings.oidc.name}` : ''}.`);
	if (settings.dataFolder && !process.env.SMTP_URL)
		say(`Mails are caught, not sent: read them here${settings.demo ? `, at ${settings.origin}/mail,` : ''} or in ${join(settings.dataFolder, 'mail')}.`);
	say('\nCtrl-C stops everything. What was saved is kept for the next start.');
}
