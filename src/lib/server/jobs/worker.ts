/**
 * The background worker: reads uploads, proposes offsets, asks about clocks. Runs inside the server process for now;
 * everything that it needs comes in as options, so that it can as well be a process of its own, or several.
 */
import PgBoss from 'pg-boss';
import { openDatabase, type Database } from '../db/client';
import { askClock } from '../import/ask-clock';
import { proposeShift } from '../import/propose-shift';
import { giveUpReading, readUpload, unfinishedUploads } from '../import/read-upload';
import type { Engine } from './engine';
import { JobLeases } from './leases';
import { createQueues, databaseQueue, QUEUE_SCHEMA, QUEUES, RETRY_LIMIT, WAKE_CHANNEL, type JobData, type QueueName } from './queue';
import { ThreadedEngine } from './threaded-engine';

export interface WorkerOptions {
	databaseUrl: string;
	/** Defaults to threads of its own. */
	engine?: Engine & { close?(): Promise<void> };
	/** Told of everything that goes wrong; defaults to stderr. */
	onError?(what: string, cause: unknown): void;
	/** How often jobs of dead workers are looked for; default 10 s. */
	sweepEveryMs?: number;
}

export interface RunningWorker {
	/** Finishes what is being worked on (10 s at most), then lets go of everything. */
	stop(): Promise<void>;
}

/** Jobs of a queue at the same time in one worker. */
const AT_ONCE: Record<QueueName, number> = { [QUEUES.readUpload]: 2, [QUEUES.proposeShift]: 1, [QUEUES.askClock]: 1 };
const SWEEP_EVERY_MS = 10_000;
/** From fetching a job to leasing it. */
const LEASE_GRACE_S = 3;

export async function startWorker(options: WorkerOptions): Promise<RunningWorker> {
	const onError = options.onError ?? ((what, cause) => console.error(`background worker: ${what}:`, cause));
	const { db, sql, close } = openDatabase(options.databaseUrl, { max: 6 });
	const engine = options.engine ?? new ThreadedEngine();
	const boss = new PgBoss({ connectionString: options.databaseUrl, schema: QUEUE_SCHEMA, max: 4, schedule: false, maintenanceIntervalSeconds: 60, application_name: 'nonius-jobs' });
	boss.on('error', (cause) => onError('queue', cause));
	await boss.start();
	await createQueues(boss);
	const leases = new JobLeases(sql, LEASE_GRACE_S);

	const handlers: { [N in QueueName]: (data: JobData[N], lastTry: boolean) => Promise<void> } = {
		[QUEUES.readUpload]: async ({ uploadId }, lastTry) => {
			try {
				await readUpload(db, engine, databaseQueue, uploadId);
			} catch (cause) {
				if (!lastTry) throw cause;
				onError(`upload ${uploadId} given up`, cause);
				await giveUpReading(db, uploadId);
			}
		},
		[QUEUES.proposeShift]: ({ recordingId }) => proposeShift(db, engine, recordingId),
		[QUEUES.askClock]: ({ recordingId }) => askClock(db, engine, recordingId)
	};

	const workersOf = new Map<string, string[]>();
	const serve = async <N extends QueueName>(queue: N) => {
		const ids: string[] = [];
		for (let i = 0; i < AT_ONCE[queue]; i++) {
			ids.push(
				await boss.work<JobData[N]>(queue, { batchSize: 1, pollingIntervalSeconds: 2, includeMetadata: true }, async ([job]) => {
					await leases.take(job.id);
					try {
						await handlers[queue](job.data, job.retryCount >= RETRY_LIMIT);
					} catch (cause) {
						onError(`${queue} ${JSON.stringify(job.data)}`, cause);
						throw cause;
					} finally {
						await leases.release(job.id);
					}
				})
			);
		}
		workersOf.set(queue, ids);
	};
	for (const queue of Object.values(QUEUES)) await serve(queue);

	const wake = (queue: string) => workersOf.get(queue)?.forEach((id) => boss.notifyWorker(id));
	const listening = await sql.listen(WAKE_CHANNEL, wake);
	const sweep = async () => {
		for (const { id, queue } of await leases.orphans()) {
			await boss.fail(queue, id, { message: 'The worker ended in the middle of this job.' });
			wake(queue);
		}
	};
	await sweep();
	await queueUnfinished(db);
	const sweeping = setInterval(() => void sweep().catch((cause: unknown) => onError('looking for orphaned jobs', cause)), options.sweepEveryMs ?? SWEEP_EVERY_MS);
	sweeping.unref();

	return {
		async stop() {
			clearInterval(sweeping);
			await listening.unlisten();
			await boss.stop({ graceful: true, wait: true, timeout: 10_000 });
			await leases.close();
			await engine.close?.();
			await close();
		}
	};
}

/** Uploads that wait without a job (the queue was emptied or restored from elsewhere) get one. */
async function queueUnfinished(db: Database): Promise<void> {
	await db.transaction(async (tx) => {
		for (const uploadId of await unfinishedUploads(tx)) await databaseQueue.add(tx, QUEUES.readUpload, { uploadId });
	});
}
