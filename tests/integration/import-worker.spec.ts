import { fork } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { eq, sql } from 'drizzle-orm';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { rawFiles, recordings, sessions, traces, uploads } from '../../src/lib/server/db/schema';
import { answerDevice } from '../../src/lib/server/import/answers';
import { importBoard } from '../../src/lib/server/import/board';
import { receiveFiles, type UploadedFile } from '../../src/lib/server/import/receive';
import { EngineStopped } from '../../src/lib/server/jobs/engine';
import { engine } from '../../src/lib/server/jobs/in-process-engine';
import { databaseQueue, prepareQueues } from '../../src/lib/server/jobs/queue';
import { startWorker, type RunningWorker, type WorkerOptions } from '../../src/lib/server/jobs/worker';
import { benchHouse, type BenchHouse } from '../support/bench-house';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { sessionFiles } from '../support/session-files';

let database: FreshDatabase;
let house: BenchHouse;
let worker: RunningWorker | null = null;

beforeAll(async () => {
	database = await freshDatabase();
	await prepareQueues(database.url);
});
afterAll(() => database?.drop());
beforeEach(async () => {
	await database.sql`truncate team, "user" cascade`;
	await database.sql`truncate pgboss.job`;
	house = await benchHouse(database.db);
});
afterEach(async () => {
	await worker?.stop();
	worker = null;
});

const start = async (options: Partial<WorkerOptions> = {}) => {
	worker = await startWorker({ databaseUrl: database.url, engine, onError: () => undefined, ...options });
};
const bring = (files: UploadedFile[]) => receiveFiles(database.db, databaseQueue, house.owner, house.study, files);
const board = () => importBoard(database.db, house.owner, house.study.id);
const rows = async (table: typeof recordings | typeof traces | typeof sessions | typeof rawFiles) => (await database.db.select({ n: sql<number>`count(*)::int` }).from(table))[0].n;

/** Waits for the background work, as the page does. */
async function until<T>(look: () => Promise<T>, holds: (value: T) => boolean): Promise<T> {
	for (let i = 0; i < 400; i++) {
		const value = await look();
		if (holds(value)) return value;
		await new Promise((r) => setTimeout(r, 100));
	}
	throw new Error(`The background work did not come so far: ${JSON.stringify(await look())}`);
}
const settled = () => until(board, (b) => b.underWay === 0);

describe('the background worker', () => {
	it('reads uploads through the queue, and searches offsets once strap and watch are together', async () => {
		await start();
		const { strap, watch } = sessionFiles({ seed: 1 });
		const receipts = await bring([strap, watch]);
		await settled();
		await answerDevice(database.db, databaseQueue, house.owner, receipts[0].uploadId, house.models[0]);
		await answerDevice(database.db, databaseQueue, house.owner, receipts[1].uploadId, house.models[1]);
		const { sessions: found } = await until(board, (b) => b.sessions.some((s) => s.state === 'aligned'));
		expect(found[0].files.map((f) => f.state)).toEqual(['filed', 'filed']);
	});

	it('takes up uploads that were made while no worker ran', async () => {
		await bring([sessionFiles({ seed: 1 }).strap]);
		await start();
		expect((await settled()).loose).toHaveLength(1);
	});

	it('takes up uploads whose jobs were lost', async () => {
		await bring([sessionFiles({ seed: 1 }).strap]);
		await database.sql`truncate pgboss.job`;
		await start();
		expect((await settled()).loose).toHaveLength(1);
	});

	it('killed in the middle of a file, leaves nothing of it, and the next worker reads the file', async () => {
		const [receipt] = await bring([sessionFiles({ seed: 1 }).strap]);
		const child = fork(fileURLToPath(new URL('../support/hanging-worker.ts', import.meta.url)), [database.url], { execArgv: ['--import', 'tsx'] });
		try {
			for (let message: unknown; message !== 'reading'; ) [message] = (await once(child, 'message')) as unknown[];
		} finally {
			child.kill('SIGKILL');
		}
		await once(child, 'exit');
		const [upload] = await database.db.select().from(uploads).where(eq(uploads.id, receipt.uploadId));
		expect(upload.state).toBe('reading');
		expect([await rows(recordings), await rows(traces), await rows(sessions)]).toEqual([0, 0, 0]);

		await start({ sweepEveryMs: 300 });
		expect((await settled()).loose[0]).toMatchObject({ uploadId: receipt.uploadId, state: 'asking' });
		expect(await rows(recordings)).toBe(1);
	});

	it('tries a file again after a fault of ours, and gives it up with a sentence when the fault stays', async () => {
		let tries = 0;
		await start({
			engine: {
				...engine,
				read: (bytes, fileName) => {
					tries += 1;
					if (fileName.startsWith('halden') && tries > 1) return engine.read(bytes, fileName);
					return Promise.reject(new Error('out of order'));
				}
			}
		});
		await bring([sessionFiles({ seed: 1 }).strap]);
		expect((await settled()).loose).toHaveLength(1);
		await bring([sessionFiles({ seed: 1 }).watch]);
		const { leftOut } = await until(board, (b) => b.leftOut.length === 1);
		expect(leftOut[0].message).toMatch(/fault of ours.*Upload it again later/);
		expect(await rows(rawFiles)).toBe(1);
	});

	it('refuses at once, without trying again, a file that cannot be read within its bounds', async () => {
		let tries = 0;
		await start({
			engine: {
				...engine,
				read: () => {
					tries += 1;
					return Promise.reject(new EngineStopped('took-too-long', 'It was not read after 60 s and the reading was stopped.'));
				}
			}
		});
		await bring([sessionFiles({ seed: 1 }).strap]);
		const { leftOut } = await until(board, (b) => b.leftOut.length === 1);
		expect(leftOut[0]).toMatchObject({ messageCode: 'took-too-long' });
		expect([tries, await rows(rawFiles)]).toEqual([1, 0]);
	});
});
