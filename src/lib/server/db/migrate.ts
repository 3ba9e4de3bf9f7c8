/** Brings a database to the current schema. */
import { fileURLToPath } from 'node:url';
import { migrate } from 'drizzle-orm/postgres-js/migrator';
import { openDatabase } from './client';

/** Applies what is missing, in order, each file in a transaction; does nothing on a current database. */
export async function migrateDatabase(url: string, folder = fileURLToPath(new URL('../../../../drizzle', import.meta.url))): Promise<void> {
	const { db, close } = openDatabase(url, { max: 1 });
	try {
		await migrate(db, { migrationsFolder: folder });
	} finally {
		await close();
	}
}
