/**
 * Which jobs are really being worked on. Every running job is held by an advisory lock of its worker's connection;
 * when the worker dies, however it dies, the database lets go of the lock, and the job is found orphaned and done again.
 */
import type postgres from 'postgres';
import { QUEUE_SCHEMA } from './queue';

/** First half of the lock's key, so that other advisory locks do not meet these. */
const LEASE_SPACE = 7_140;

export class JobLeases {
	/** One connection for all of this worker's locks, opened with the first. */
	private holder: Promise<postgres.ReservedSql> | null = null;

	constructor(
		private readonly sql: postgres.Sql,
		/** A job is fetched a moment before it is leased. */
		private readonly graceS: number
	) {}

	async take(jobId: string): Promise<void> {
		this.holder ??= this.sql.reserve();
		const connection = await this.holder;
		await connection`select pg_advisory_lock(${LEASE_SPACE}::int, hashtext(${jobId}))`;
	}

	async release(jobId: string): Promise<void> {
		const connection = await this.holder;
		if (connection) await connection`select pg_advisory_unlock(${LEASE_SPACE}::int, hashtext(${jobId}))`;
	}

	/** Jobs marked as running that no living worker holds. */
	async orphans(): Promise<{ id: string; queue: string }[]> {
		const rows = await this.sql<{ id: string; name: string }[]>`
			select j.id, j.name from ${this.sql(QUEUE_SCHEMA)}.job j
			where j.state = 'active' and j.started_on < now() - make_interval(secs => ${this.graceS})
			and not exists (
				select 1 from pg_locks l
				where l.locktype = 'advisory' and l.objsubid = 2 and l.granted
				and l.database = (select oid from pg_database where datname = current_database())
				and l.classid::bigint = ${LEASE_SPACE} and l.objid::bigint = (hashtext(j.id::text)::bigint & 4294967295)
			)`;
		return rows.map((r) => ({ id: r.id, queue: r.name }));
	}

	async close(): Promise<void> {
		const connection = await this.holder;
		this.holder = null;
		connection?.release();
	}
}
