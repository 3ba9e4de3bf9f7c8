/** `npm start`: everything from the database to the printed address; Ctrl-C stops all of it. */
import { join } from 'node:path';
import postgres from 'postgres';
import { openDatabase } from '../lib/server/db/client';
import { migrateDatabase } from '../lib/server/db/migrate';
import { teams } from '../lib/server/db/schema';
import { loadSettings, SettingsError, type Settings } from '../lib/server/settings';
import { ensureBuilt } from './local/build';
import { dataFolder } from './local/data-folder';
import { ensureDatabase, localSecret } from './local/local-parts';
import { takeLock } from './local/lock';
import { startMailCatcher } from './local/mail-catcher';
import { startCluster } from './local/postgres';
import { StopSentence } from './local/sentence';
import { startServer } from './local/server';

const say = (words: string) => console.log(words);
type Stop = () => void | Promise<void>;

export async function main(_args: string[]): Promise<number> {
	const stops: Stop[] = [];
	let ending: Promise<void> | null = null;
	const stopAll = () =>
		(ending ??= (async () => {
			for (const stop of stops.reverse()) await stop();
		})());
	for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const)
		process.on(signal, () => {
			if (!ending) say('\nStopping …');
			void stopAll().then(() => process.exit(0));
		});

	try {
		const began = Date.now();
		const given = process.env.DATABASE_URL !== undefined && process.env.DATABASE_URL !== '';
		const settings = given ? await deployed() : await local(stops);
		ensureBuilt(say);
		const server = await startServer(environmentOf(settings));
		stops.push(() => server.stop());
		if (ending) return 0;
		await announce(settings, Date.now() - began);
		const code = await server.ended;
		if (ending) {
			await ending;
			return 0;
		}
		console.error(`The server ended by itself (exit status ${code}). Start again: nothing that was saved is lost.`);
		await stopAll();
		return 1;
	} catch (cause) {
		await stopAll();
		if (!(cause instanceof StopSentence) && !(cause instanceof SettingsError)) throw cause;
		console.error(cause.message);
		return 1;
	}
}

/** A real deployment: nothing local is started, every setting must be there. */
async function deployed(): Promise<Settings> {
	const settings = loadSettings(process.env);
	const sql = postgres(settings.databaseUrl, { max: 1, connect_timeout: 10, onnotice: () => {} });
	try {
		await sql`select 1`;
	} catch (cause) {
		throw new StopSentence(`The database at DATABASE_URL does not answer (${cause instanceof Error ? cause.message : String(cause)}). Check the address and that PostgreSQL runs there.`);
	} finally {
		await sql.end({ timeout: 1 });
	}
	await migrateDatabase(settings.databaseUrl);
	return settings;
}

/** Everything local: cluster, mail catcher, secret, demo content. What is given in the environment replaces its part. */
async function local(stops: Stop[]): Promise<Settings> {
	const folder = dataFolder();
	const port = process.env.PORT || '4180';
	const host = process.env.HOST || '127.0.0.1';
	const settingsWith = (databaseUrl: string, smtpUrl: string) =>
		loadSettings({
			...process.env,
			PORT: port,
			HOST: host,
			DATABASE_URL: databaseUrl,
			SMTP_URL: smtpUrl,
			ORIGIN: process.env.ORIGIN || `http://127.0.0.1:${port}`,
			AUTH_SECRET: process.env.AUTH_SECRET || localSecret(folder),
			NONIUS_DATA: folder,
			NONIUS_DEMO: process.env.NONIUS_DEMO || (host === '127.0.0.1' && !process.env.ORIGIN ? '1' : '0')
		});
	// What was given is judged before anything is started.
	settingsWith('postgres://127.0.0.1/nonius', process.env.SMTP_URL || 'smtp://127.0.0.1');

	stops.push(takeLock(join(folder, 'start.pid')));
	const cluster = await startCluster(join(folder, 'postgres'), say);
	stops.push(() => cluster.stop());
	const databaseUrl = await ensureDatabase(cluster, 'nonius');

	let smtpUrl = process.env.SMTP_URL;
	if (!smtpUrl) {
		const catcher = await startMailCatcher(join(folder, 'mail'), (mail) => say(`Mail for ${mail.to}: ${mail.subject}${mail.link ? `\n  ${mail.link}` : ''}`));
		stops.push(() => catcher.stop());
		smtpUrl = catcher.smtpUrl;
	}
	const settings = settingsWith(databaseUrl, smtpUrl);
	if (settings.demo) await ensureDemo(settings.databaseUrl);
	return settings;
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

/** What the server process reads. */
export function environmentOf(settings: Settings): Record<string, string | undefined> {
	return {
		...process.env,
		PORT: String(settings.port),
		HOST: settings.host,
		DATABASE_URL: settings.databaseUrl,
		SMTP_URL: settings.smtpUrl,
		MAIL_FROM: settings.mailFrom,
		ORIGIN: settings.origin,
		AUTH_SECRET: settings.authSecret,
		AUTH_URL: `${settings.origin}/auth`,
		OIDC_ISSUER: settings.oidc?.issuer,
		OIDC_CLIENT_ID: settings.oidc?.clientId,
		OIDC_CLIENT_SECRET: settings.oidc?.clientSecret,
		OIDC_NAME: settings.oidc?.name,
		NONIUS_MAX_UPLOAD_MB: String(settings.maxUploadBytes / 1024 / 1024),
		NONIUS_DEMO: settings.demo ? '1' : '0',
		NONIUS_DATA: settings.dataFolder ?? undefined,
		// The form around a file adds a little; the sentence about too large files is ours, not the adapter's.
		BODY_SIZE_LIMIT: String(settings.maxUploadBytes * 4 + 1024 * 1024)
	};
}

async function announce(settings: Settings, tookMs: number): Promise<void> {
	say(`\nNonius is ready at ${settings.origin} (${(tookMs / 1000).toFixed(1)} s)`);
	if (settings.demo) {
		const { demoPeople } = await import('../lib/server/auth/demo');
		const { db, close } = openDatabase(settings.databaseUrl, { max: 1 });
		const people = await demoPeople(db).finally(close);
		say('\nDemo people. One click on the sign-in page signs in as any of them; or ask for a link to the address:');
		for (const p of people) say(`  ${p.initials.padEnd(3)} ${p.role.padEnd(12)} ${p.email}`);
		if (settings.dataFolder) say(`Mails are caught, not sent: read them here, at ${settings.origin}/mail, or in ${join(settings.dataFolder, 'mail')}.`);
	}
	say('\nCtrl-C stops everything. What was saved is kept for the next start.');
}
