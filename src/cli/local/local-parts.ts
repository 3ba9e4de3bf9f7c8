/** The local parts that stand in for hosted ones: database, mail catcher, secrets. Shared by start and tests. */
import { randomBytes } from 'node:crypto';
import { chmodSync, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import postgres from 'postgres';
import { migrateDatabase } from '../../lib/server/db/migrate';
import type { Cluster } from './postgres';

/** Makes the database when it is not there yet, and brings it to the current schema. */
export async function ensureDatabase(cluster: Cluster, name: string): Promise<string> {
	const sql = postgres(cluster.url('postgres'), { max: 1, onnotice: () => {} });
	try {
		const [found] = await sql`select 1 from pg_database where datname = ${name}`;
		if (!found) await sql.unsafe(`create database "${name}"`);
	} finally {
		await sql.end();
	}
	await migrateDatabase(cluster.url(name));
	return cluster.url(name);
}

/** A secret of this data folder, made once. */
export function localSecret(folder: string): string {
	const file = join(folder, 'auth-secret');
	if (!existsSync(file)) {
		writeFileSync(file, randomBytes(32).toString('hex'), { mode: 0o600 });
		chmodSync(file, 0o600);
	}
	return readFileSync(file, 'utf8').trim();
}
