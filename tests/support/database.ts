/** A database of its own for every test file, copied from a migrated template in a moment. */
import { randomBytes } from 'node:crypto';
import postgres from 'postgres';
import { openDatabase, type OpenDatabase } from '../../src/lib/server/db/client';

export interface FreshDatabase extends OpenDatabase {
	url: string;
	/** Closes and drops it. */
	drop(): Promise<void>;
}

/** @throws when the tests are not run through `npm test`, which starts the cluster */
export async function freshDatabase(): Promise<FreshDatabase> {
	const base = process.env.TEST_DATABASE_URL;
	const template = process.env.TEST_DATABASE_TEMPLATE;
	if (!base || !template) throw new Error('These tests need the cluster that `npm test -- --only integration` starts.');
	const name = `nonius_test_${randomBytes(6).toString('hex')}`;
	await asAdmin(base, (sql) => sql.unsafe(`create database "${name}" template "${template}"`));
	const url = `${base}/${name}`;
	const opened = openDatabase(url, { max: 5 });
	return {
		...opened,
		url,
		async drop() {
			await opened.close();
			await asAdmin(base, (sql) => sql.unsafe(`drop database if exists "${name}" with (force)`));
		}
	};
}

async function asAdmin(base: string, work: (sql: postgres.Sql) => Promise<unknown>): Promise<void> {
	const sql = postgres(`${base}/postgres`, { max: 1, onnotice: () => {} });
	try {
		// Copying a template needs it to itself for a moment: another test file may be at it.
		for (let attempt = 0; ; attempt++) {
			try {
				await work(sql);
				return;
			} catch (cause) {
				if (attempt >= 40 || !/being accessed by other users/.test(String(cause))) throw cause;
				await new Promise((r) => setTimeout(r, 100 + 50 * Math.random()));
			}
		}
	} finally {
		await sql.end();
	}
}
