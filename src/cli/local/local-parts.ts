/** The local parts that stand in for hosted ones: databases of the cluster, secrets. Shared by start and tests. */
import { randomBytes } from 'node:crypto';
import { chmodSync, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import postgres from 'postgres';
import { migrateDatabase } from '../../lib/server/db/migrate';
import type { Cluster } from './postgres';

/** Makes the database when it is not there yet, and brings it to the current schema. */
export async function ensureDatabase(cluster: Cluster, name: string): Promise<string> {
	await asAdmin(cluster, async (sql) => {
		const [found] = await sql`select 1 from pg_database where datname = ${name}`;
		if (!found) await sql.unsafe(`create database "${name}"`);
	});
	await migrateDatabase(cluster.url(name));
	return cluster.url(name);
}

/** Drops every database whose name begins so: what killed test runs left behind, made for older migrations. */
export async function dropDatabases(cluster: Cluster, prefix: string): Promise<void> {
	await asAdmin(cluster, async (sql) => {
		const left = await sql<{ datname: string }[]>`select datname from pg_database where starts_with(datname, ${prefix})`;
		for (const { datname } of left) await sql.unsafe(`drop database if exists "${datname}" with (force)`);
	});
}

async function asAdmin(cluster: Cluster, work: (sql: postgres.Sql) => Promise<void>): Promise<void> {
	const sql = postgres(cluster.url('postgres'), { max: 1, onnotice: () => {} });
	try {
		await work(sql);
	} finally {
		await sql.end();
	}
}

/** A secret of this data folder, made once. */
export function localSecret(folder: string): string {
	const file = join(folder, 'auth-secret');
	const kept = existsSync(file) ? readFileSync(file, 'utf8').trim() : '';
	if (kept.length >= 32) return kept;
	const made = randomBytes(32).toString('hex');
	writeFileSync(file, made, { mode: 0o600 });
	chmodSync(file, 0o600);
	return made;
}
