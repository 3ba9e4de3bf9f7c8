/** The one way to the database. */
import { drizzle, type PostgresJsDatabase } from 'drizzle-orm/postgres-js';
import postgres from 'postgres';
import * as schema from './schema';

export type Database = PostgresJsDatabase<typeof schema>;
/** A transaction or the database itself: what queries take. */
export type Queryable = Pick<Database, 'select' | 'selectDistinct' | 'selectDistinctOn' | 'insert' | 'update' | 'delete' | 'execute' | 'query' | 'transaction'>;

export interface OpenDatabase {
	db: Database;
	sql: postgres.Sql;
	close(): Promise<void>;
}

/** Opens a pool. `close` waits for running queries (5 s at most). */
export function openDatabase(url: string, options: { max?: number } = {}): OpenDatabase {
	const sql = postgres(url, { max: options.max ?? 10, onnotice: () => {}, connection: { application_name: 'nonius' } });
	return { db: drizzle(sql, { schema }), sql, close: () => sql.end({ timeout: 5 }) };
}
