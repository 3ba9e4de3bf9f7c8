/** A real deployment: nothing local is started, every setting must be there and the database must answer. */
import postgres from 'postgres';
import { migrateDatabase } from '../../lib/server/db/migrate';
import { loadSettings, type Settings } from '../../lib/server/settings';
import { OLDEST_POSTGRES } from './postgres-binaries';
import { StopSentence } from './sentence';

/**
 * @returns the settings, the database brought to the current schema
 * @throws SettingsError and StopSentence, each one sentence
 */
export async function deployed(env: Record<string, string | undefined>): Promise<Settings> {
	const settings = loadSettings(env);
	const sql = postgres(settings.databaseUrl, { max: 1, connect_timeout: 10, onnotice: () => {} });
	let version: number;
	try {
		const [row] = await sql<{ version: number }[]>`select current_setting('server_version_num')::int as version`;
		version = Math.floor(row.version / 10_000);
	} catch (cause) {
		throw new StopSentence(`The database at DATABASE_URL cannot be used (${reason(cause)}). Check its address, user, password and name, and that PostgreSQL runs there.`);
	} finally {
		await sql.end({ timeout: 1 });
	}
	if (version < OLDEST_POSTGRES) throw new StopSentence(`The database at DATABASE_URL is PostgreSQL ${version}; Nonius needs ${OLDEST_POSTGRES} or newer.`);
	await migrateDatabase(settings.databaseUrl).catch((cause: unknown) => {
		throw new StopSentence(`The database at DATABASE_URL could not be brought to the current schema (${reason(cause)}). Its user must own the database; nothing was changed.`);
	});
	return settings;
}

/** What the database said, shortly; several attempts at several addresses carry their reasons inside. */
function reason(cause: unknown): string {
	if (cause instanceof AggregateError && cause.errors.length > 0) return reason(cause.errors[0]);
	if (!(cause instanceof Error)) return String(cause);
	if (cause.cause instanceof Error) return reason(cause.cause);
	return cause.message || String((cause as NodeJS.ErrnoException).code ?? cause.name);
}
