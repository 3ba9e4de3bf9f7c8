/**
 * The queues of background work and how a transaction puts jobs into them.
 *
 * Jobs live in the database (schema `pgboss`), and a job is written in the transaction that makes it necessary: an
 * upload without its job, or a job without its upload, cannot exist.
 */
import { sql, type SQL } from 'drizzle-orm';
import PgBoss from 'pg-boss';
import type { Queryable } from '../db/client';

export const QUEUE_SCHEMA = 'pgboss';
/** Workers listen here and look at once, instead of at their next poll. */
export const WAKE_CHANNEL = 'nonius_jobs';

export const QUEUES = {
	/** Reads an uploaded file and files it among the sessions. */
	readUpload: 'read-upload',
	/** Searches the offset of a wearable and proposes it. */
	proposeShift: 'propose-shift',
	/** Looks whether a lone recording is a session's, its clock set to another zone. */
	askClock: 'ask-clock'
} as const;
export type QueueName = (typeof QUEUES)[keyof typeof QUEUES];

export interface JobData {
	[QUEUES.readUpload]: { uploadId: string };
	[QUEUES.proposeShift]: { recordingId: string };
	[QUEUES.askClock]: { recordingId: string };
}

/** A job nobody finishes is done again this often, then told as failed. */
export const RETRY_LIMIT = 3;

/** Where the import puts what has to be done later: the queue of the database, or a list worked off by the caller. */
export interface JobSink {
	add<N extends QueueName>(tx: Queryable, queue: N, data: JobData[N]): Promise<void>;
}

let sender: PgBoss | null = null;

/** Writes jobs into the database's queue, in the caller's transaction. */
export const databaseQueue: JobSink = {
	async add(tx, queue, data) {
		sender ??= new PgBoss({ db: notConnected, schema: QUEUE_SCHEMA, supervise: false, schedule: false, migrate: false });
		const id = await sender.send(queue, data, { db: through(tx), retryLimit: RETRY_LIMIT, expireInSeconds: 600 });
		if (id === null) throw new Error(`The queue ${queue} does not exist yet; start the background worker once, it makes its queues.`);
		await tx.execute(sql`select pg_notify(${WAKE_CHANNEL}, ${queue})`);
	}
};

/** Collects jobs for a caller that does the work itself, in order (demo content, tests). */
export class JobList implements JobSink {
	readonly jobs: { queue: QueueName; data: JobData[QueueName] }[] = [];
	async add<N extends QueueName>(_tx: Queryable, queue: N, data: JobData[N]): Promise<void> {
		this.jobs.push({ queue, data });
	}
}

/** Makes the schema and the queues where they are missing. Safe to call from several processes at once. */
export async function prepareQueues(databaseUrl: string): Promise<void> {
	const boss = new PgBoss({ connectionString: databaseUrl, schema: QUEUE_SCHEMA, max: 1, supervise: false, schedule: false });
	await boss.start();
	await createQueues(boss);
	await boss.stop({ graceful: false });
}

export async function createQueues(boss: PgBoss): Promise<void> {
	for (const name of Object.values(QUEUES)) {
		await boss.createQueue(name, { name, policy: 'standard', retryLimit: RETRY_LIMIT, expireInSeconds: 600 });
	}
}

const notConnected: PgBoss.Db = {
	executeSql: () => Promise.reject(new Error('Jobs are written through the transaction that makes them necessary.'))
};

/** Runs the queue's own statements (`$1`, `$2`, …) in a Drizzle transaction. */
function through(tx: Queryable): PgBoss.Db {
	return {
		async executeSql(text: string, values: unknown[] = []) {
			const parts: SQL[] = text.split(/\$(\d+)/).map((part, i) => (i % 2 === 0 ? sql.raw(part) : sql`${asParameter(values[Number(part) - 1])}`));
			const rows = await tx.execute(sql.join(parts));
			return { rows: [...rows] };
		}
	};
}

function asParameter(value: unknown): string | number | boolean | null {
	if (value === undefined || value === null) return null;
	if (typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') return value;
	return JSON.stringify(value);
}
