import { and, eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { alignments, deviceUnits, rawFiles, recordings, sessions, traces, uploads } from '../../src/lib/server/db/schema';
import { answerDevice, describeSession, keepApart, placeInSession, takeOut } from '../../src/lib/server/import/answers';
import { importBoard } from '../../src/lib/server/import/board';
import { outlinesOf } from '../../src/lib/server/import/outlines';
import { receiveFiles, type UploadedFile } from '../../src/lib/server/import/receive';
import type { Actor } from '../../src/lib/server/auth/actor';
import { engine } from '../../src/lib/server/jobs/in-process-engine';
import { JobList } from '../../src/lib/server/jobs/queue';
import { workOff } from '../../src/lib/server/jobs/work-off';
import { benchHouse, type BenchHouse } from '../support/bench-house';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { sessionFiles } from '../support/session-files';

let database: FreshDatabase;
let house: BenchHouse;
const jobs = new JobList();

beforeAll(async () => {
	database = await freshDatabase();
});
afterAll(() => database?.drop());
beforeEach(async () => {
	await database.sql`truncate team, "user" cascade`;
	house = await benchHouse(database.db);
});

async function bring(files: UploadedFile[], actor: Actor = house.owner) {
	const receipts = await receiveFiles(database.db, jobs, actor, house.study, files);
	await workOff(database.db, engine, jobs);
	return receipts;
}
async function answer(uploadId: string, model: number, actor: Actor = house.owner) {
	const settled = await answerDevice(database.db, jobs, actor, uploadId, house.models[model]);
	await workOff(database.db, engine, jobs);
	return settled;
}
const board = (actor: Actor = house.owner) => importBoard(database.db, actor, house.study.id);
const count = async (table: typeof rawFiles | typeof recordings | typeof traces | typeof uploads | typeof sessions) => (await database.db.select({ n: sql<number>`count(*)::int` }).from(table))[0].n;

/** A whole session in its place: strap, watch and band, the devices answered once. */
async function bringSession(request: Parameters<typeof sessionFiles>[0] = { seed: 1 }, actor: Actor = house.owner) {
	const files = sessionFiles(request);
	const receipts = await bring([files.strap, files.watch, files.band], actor);
	for (const [model, receipt] of receipts.entries()) {
		const [upload] = await database.db.select().from(uploads).where(eq(uploads.id, receipt.uploadId));
		if (upload.question?.code === 'which-device') await answer(upload.id, model, house.owner);
	}
	return { files, receipts };
}

describe('several files at once', () => {
	it('become one session with its reference, its wearer, its activity and a proposed offset for every wearable', async () => {
		await bringSession();
		const { sessions: found, loose, leftOut } = await board();
		expect(found).toHaveLength(1);
		expect(found[0]).toMatchObject({ code: 'S01', hasReference: true, participantCode: 'P03', activity: 'Hill running', state: 'aligned' });
		expect(found[0].files.map((f) => f.state)).toEqual(['filed', 'filed', 'filed']);
		expect(loose).toEqual([]);
		expect(leftOut).toEqual([]);
		const offsets = found[0].files.map((f) => f.recording?.offset).slice(1);
		for (const offset of offsets) expect(offset).toMatchObject({ stands: true });
		const [strap] = await database.db.select().from(recordings).where(eq(recordings.deviceModelId, house.models[0]));
		expect([found[0].startS, found[0].endS]).toEqual([strap.startS, strap.endS]);
	});

	it('give traces whose samples come back as they were read', async () => {
		const { files } = await bringSession();
		const [{ reading }] = await engine.read(files.strap.bytes, files.strap.fileName);
		if (!reading.ok) throw new Error(reading.refusal.message);
		const heartRate = reading.recording.traces.find((t) => t.kind === 'heartRate');
		const [kept] = await database.db
			.select({ tS: traces.tS, value: traces.value })
			.from(traces)
			.innerJoin(recordings, eq(recordings.id, traces.recordingId))
			.where(and(eq(recordings.fileName, files.strap.fileName), eq(traces.kind, 'heartRate')));
		expect(kept.tS).toEqual(heartRate?.tS);
		expect(kept.value).toEqual(heartRate?.value);
	});

	it('that do not overlap become two sessions, and it is said', async () => {
		await bringSession();
		const later = sessionFiles({ seed: 2, startS: Date.UTC(2026, 9, 14, 12, 0) / 1000 });
		await bring([later.strap]);
		const { sessions: found } = await board();
		expect(found.map((s) => s.code)).toEqual(['S02', 'S01']);
		expect(found[0].files[0].message).toBe('S02 was opened for it; nothing else overlapped it by half of the shorter one.');
	});

	it('keep a unit per serial number and firmware', async () => {
		await bringSession();
		await bringSession({ seed: 3, startS: Date.UTC(2026, 9, 15, 7, 0) / 1000 });
		const units = await database.db.select().from(deviceUnits).where(eq(deviceUnits.deviceModelId, house.models[0]));
		expect(units).toMatchObject([{ serial: '1100417', firmware: '2.10' }]);
	});
});

describe('which device made this file', () => {
	it('is asked once; the answer settles every waiting file of the same origin, and next week’s files are not asked about', async () => {
		const first = sessionFiles({ seed: 1 });
		const second = sessionFiles({ seed: 2, startS: Date.UTC(2026, 9, 15, 7, 0) / 1000 });
		const [asked] = await bring([first.strap, second.strap]);
		expect((await board()).loose.map((f) => f.question?.code)).toEqual(['which-device', 'which-device']);
		expect(await answer(asked.uploadId, 0)).toBe(2);
		expect((await board()).loose).toEqual([]);
		await bring([sessionFiles({ seed: 4, startS: Date.UTC(2026, 9, 16, 7, 0) / 1000 }).strap]);
		expect((await board()).sessions.map((s) => s.hasReference)).toEqual([true, true, true]);
	});

	it('carries a suggestion where the file names the device, and none where it does not', async () => {
		const files = sessionFiles({ seed: 1 });
		await bring([files.watch, files.band]);
		const suggestions = Object.fromEntries((await board()).loose.map((f) => [f.fileName, f.question?.code === 'which-device' && f.question.suggestedModelId]));
		expect(suggestions[files.watch.fileName]).toBe(house.models[1]);
		expect(suggestions[files.band.fileName]).toBeNull();
	});

	it('corrected afterwards, moves the recording to the right device and remembers that', async () => {
		const { receipts } = await bringSession();
		await takeOut(database.db, house.owner, receipts[1].uploadId);
		await answer(receipts[2].uploadId, 1);
		const band = (await board()).sessions[0].files.find((f) => f.uploadId === receipts[2].uploadId);
		expect(band?.recording?.deviceModelId).toBe(house.models[1]);
		await bring([sessionFiles({ seed: 6, startS: Date.UTC(2026, 9, 20, 7, 0) / 1000 }).band]);
		expect((await board()).sessions[0].files[0].recording?.deviceModelId).toBe(house.models[1]);
	});
});

describe('the same bytes again', () => {
	it('are told as a duplicate and not stored twice, whatever they are called', async () => {
		const { files } = await bringSession();
		const before = [await count(rawFiles), await count(recordings)];
		const [receipt] = await bring([{ ...files.strap, fileName: 'copy of it.fit' }]);
		expect(receipt).toMatchObject({ state: 'refused' });
		expect(receipt.message).toBe(`The same file, byte for byte, is already here as ${files.strap.fileName}, in S01. One was kept; there is nothing to do.`);
		expect([await count(rawFiles), await count(recordings)]).toEqual(before);
	});

	it('sent twice at the same moment, are kept once', async () => {
		const { strap } = sessionFiles({ seed: 1 });
		const receipts = await Promise.all([1, 2, 3].map(() => receiveFiles(database.db, jobs, house.owner, house.study, [strap])));
		await workOff(database.db, engine, jobs);
		expect(receipts.flat().filter((r) => r.state === 'waiting')).toHaveLength(1);
		expect([await count(rawFiles), await count(recordings)]).toEqual([1, 1]);
	});
});

describe('a refused file', () => {
	const text = (content: string) => new TextEncoder().encode(content);
	it.each([
		['without heart rate', 'route.csv', text('time,speed\n2026-10-14T07:31:00Z,3.1\n2026-10-14T07:31:01Z,3.2\n2026-10-14T07:31:02Z,3.2\n'), /heart rate/],
		['of no known kind', 'photo.jpg', new Uint8Array([0xff, 0xd8, 0xff, 0xe0, 0, 16, 74, 70, 73, 70]), /FIT, TCX, GPX/],
		['that is empty', 'nothing.fit', new Uint8Array(), /empty/],
		['cut off before its first reading', 'cut.fit', sessionFiles({ seed: 1 }).strap.bytes.slice(0, 40), /heart rate|record|cut/]
	])('%s leaves only its row and its sentence', async (_what, fileName, bytes, sentence) => {
		const [receipt] = await bring([{ fileName, bytes }]);
		const [upload] = await database.db.select().from(uploads).where(eq(uploads.id, receipt.uploadId));
		expect(upload).toMatchObject({ state: 'refused', rawFileId: null, recordingId: null });
		expect(upload.message).toMatch(sentence);
		expect([await count(rawFiles), await count(recordings), await count(traces), await count(sessions)]).toEqual([0, 0, 0, 0]);
	});

	it('does not take along the good files beside it', async () => {
		const { strap } = sessionFiles({ seed: 1 });
		await bring([{ fileName: 'nothing.fit', bytes: new Uint8Array() }, strap]);
		expect((await board()).loose).toHaveLength(1);
	});

	it('that is larger than the server takes is not stored', async () => {
		const [receipt] = await receiveFiles(database.db, jobs, house.owner, house.study, [{ fileName: 'large.csv', bytes: new Uint8Array(2048) }], 1024);
		expect(receipt).toMatchObject({ state: 'refused' });
		expect(receipt.message).toMatch(/is the most for one file/);
		expect(await count(rawFiles)).toBe(0);
	});
});

describe('sorting', () => {
	it('asks when a second file of the same device overlaps, and opens a session of its own on that answer', async () => {
		await bringSession();
		const [receipt] = await bring([sessionFiles({ seed: 7 }).strap]);
		const [asking] = (await board()).loose;
		expect(asking.question).toMatchObject({ code: 'device-twice' });
		await placeInSession(database.db, jobs, house.owner, receipt.uploadId, null);
		expect((await board()).sessions.map((s) => s.files.length).sort()).toEqual([1, 3]);
	});

	it('keeps a session without a reference and aligns it when the strap file comes', async () => {
		const files = sessionFiles({ seed: 1 });
		const [watch] = await bring([files.watch]);
		await answer(watch.uploadId, 1);
		expect((await board()).sessions[0]).toMatchObject({ hasReference: false, state: 'imported' });
		const [strap] = await bring([files.strap]);
		await answer(strap.uploadId, 0);
		expect((await board()).sessions).toMatchObject([{ code: 'S01', hasReference: true, state: 'aligned' }]);
	});

	it('proposes another zone when a watch is two hours off and its heart rate fits, and takes the answer either way', async () => {
		const files = sessionFiles({ seed: 1, watchOffsetS: 7203 });
		const [strap] = await bring([files.strap]);
		await answer(strap.uploadId, 0);
		const [watch] = await bring([files.watch]);
		await answer(watch.uploadId, 1);
		const asking = (await board()).sessions.flatMap((s) => s.files).find((f) => f.question?.code === 'clock');
		expect(asking?.question).toMatchObject({ zoneShiftS: 7200 });
		const target = asking?.question?.code === 'clock' ? asking.question.sessionId : '';

		await placeInSession(database.db, jobs, house.owner, watch.uploadId, target);
		await workOff(database.db, engine, jobs);
		const { sessions: found } = await board();
		expect(found).toHaveLength(1);
		const offset = found[0].files[1].recording?.offset;
		expect(offset?.stands).toBe(true);
		expect(Math.abs((offset?.offsetS ?? 0) - 7200)).toBeLessThan(10);
	});

	it('does not ask again about a clock that was said to be apart', async () => {
		const files = sessionFiles({ seed: 1, watchOffsetS: 7203 });
		const [watch] = await bring([files.watch]);
		await answer(watch.uploadId, 1);
		const [strap] = await bring([files.strap]);
		await answer(strap.uploadId, 0);
		expect((await board()).sessions.flatMap((s) => s.files).filter((f) => f.state === 'asking')).toHaveLength(1);
		await keepApart(database.db, house.owner, watch.uploadId);
		jobs.jobs.push({ queue: 'ask-clock', data: { recordingId: (await database.db.select().from(uploads).where(eq(uploads.id, watch.uploadId)))[0].recordingId ?? '' } });
		await workOff(database.db, engine, jobs);
		expect((await board()).sessions.flatMap((s) => s.files).filter((f) => f.state === 'asking')).toEqual([]);
	});

	it('takes a file out again with everything that came from it, and the session with its last file', async () => {
		const { receipts } = await bringSession();
		for (const { uploadId } of receipts) await takeOut(database.db, house.owner, uploadId);
		expect([await count(rawFiles), await count(recordings), await count(traces), await count(sessions), await count(uploads)]).toEqual([0, 0, 0, 0, 0]);
		expect((await database.sql`select count(*)::int as n from audit_entry where action = 'recording.removed'`)[0].n).toBe(3);
	});

	it('lets nothing in or out of a session in review', async () => {
		const { receipts } = await bringSession();
		await database.db.update(sessions).set({ state: 'in review' });
		await expect(takeOut(database.db, house.owner, receipts[1].uploadId)).rejects.toMatchObject({ kind: 'conflict' });
		await expect(placeInSession(database.db, jobs, house.owner, receipts[1].uploadId, null)).rejects.toMatchObject({ kind: 'conflict' });
		const [again] = await bring([sessionFiles({ seed: 9 }).watch]);
		const [upload] = await database.db.select().from(uploads).where(eq(uploads.id, again.uploadId));
		expect(upload.question?.code).toBe('device-twice');
	});

	it('leaves an offset alone that a person has set', async () => {
		const { files } = await bringSession();
		const [watch] = await database.db.select().from(recordings).where(eq(recordings.fileName, files.watch.fileName));
		await database.db.insert(alignments).values({ teamId: watch.teamId, recordingId: watch.id, version: 2, offsetS: 1.25, method: 'hand', authorId: house.owner.memberId });
		jobs.jobs.push({ queue: 'propose-shift', data: { recordingId: watch.id } });
		await workOff(database.db, engine, jobs);
		const versions = await database.db.select().from(alignments).where(eq(alignments.recordingId, watch.id));
		expect(versions.map((v) => v.version).sort()).toEqual([1, 2]);
	});

	it('says who wore the devices, with a code that is new to the team', async () => {
		await bringSession();
		const [session] = (await board()).sessions;
		await describeSession(database.db, house.analyst, house.study.id, session.sessionId, { participantCode: 'p12', activity: 'Indoor cycling' });
		expect((await board()).sessions[0]).toMatchObject({ participantCode: 'P12', activity: 'Indoor cycling' });
		await expect(describeSession(database.db, house.analyst, house.study.id, session.sessionId, { participantCode: 'Jane Doe' })).rejects.toMatchObject({ kind: 'invalid' });
		await expect(describeSession(database.db, house.analyst, house.study.id, session.sessionId, { activity: 'Chess' })).rejects.toMatchObject({ kind: 'invalid' });
	});
});

describe('a job that does not finish', () => {
	it('leaves nothing when its transaction breaks off, and does everything when it is done again', async () => {
		const { strap } = sessionFiles({ seed: 1 });
		const [receipt] = await receiveFiles(database.db, jobs, house.owner, house.study, [strap]);
		// The last statement of the transaction fails, as if the connection had gone.
		await database.sql`create function break_off() returns trigger language plpgsql as $$ begin raise exception 'broken off'; end $$`;
		await database.sql`create trigger break_off before update on upload for each row when (new.state = 'asking') execute function break_off()`;
		await expect(workOff(database.db, engine, jobs)).rejects.toThrow();
		expect([await count(recordings), await count(traces), await count(sessions)]).toEqual([0, 0, 0]);
		const [upload] = await database.db.select().from(uploads).where(eq(uploads.id, receipt.uploadId));
		expect(upload).toMatchObject({ state: 'reading', recordingId: null });

		await database.sql`drop function break_off cascade`;
		jobs.jobs.splice(0);
		jobs.jobs.push({ queue: 'read-upload', data: { uploadId: receipt.uploadId } }, { queue: 'read-upload', data: { uploadId: receipt.uploadId } });
		await workOff(database.db, engine, jobs);
		expect([await count(recordings), await count(uploads)]).toEqual([1, 1]);
	});
});

describe('who may', () => {
	it('see and answer: nobody of another team', async () => {
		const { receipts } = await bringSession();
		await expect(importBoard(database.db, house.stranger, house.study.id)).rejects.toMatchObject({ kind: 'not-found' });
		await expect(answerDevice(database.db, jobs, house.stranger, receipts[0].uploadId, house.models[0])).rejects.toMatchObject({ kind: 'not-found' });
		await expect(takeOut(database.db, house.stranger, receipts[0].uploadId)).rejects.toMatchObject({ kind: 'not-found' });
		const ids = (await database.db.select({ id: recordings.id }).from(recordings)).map((r) => r.id);
		expect(await outlinesOf(database.db, house.stranger, house.study.id, ids)).toEqual({});
		expect(Object.keys(await outlinesOf(database.db, house.owner, house.study.id, ids))).toHaveLength(3);
	});

	it('keep the same bytes: each team for itself', async () => {
		const { files } = await bringSession();
		const [receipt] = await receiveFiles(database.db, jobs, house.stranger, house.strangerStudy, [files.strap]);
		expect(receipt.state).toBe('waiting');
		await workOff(database.db, engine, jobs);
	});

	it('upload: not a reader', async () => {
		await expect(bring([sessionFiles({ seed: 1 }).strap], house.reader)).rejects.toMatchObject({ kind: 'not-allowed' });
	});

	it('upload as a contributor: own recordings into own sessions, unseen by and blind to the others', async () => {
		await bringSession({ seed: 1, wearer: 'p03' });
		const own = sessionFiles({ seed: 2, wearer: 'p03', strapSerial: '1100500' });
		const [receipt] = await bring([own.watch], house.contributor);
		const seen = await board(house.contributor);
		expect(seen.sessions).toHaveLength(1);
		expect(seen.sessions[0]).toMatchObject({ code: 'S02', participantCode: 'P08' });
		expect(seen.sessions[0].files.map((f) => f.uploadId)).toEqual([receipt.uploadId]);
		expect(seen.participants.map((p) => p.code)).toEqual(['P08']);

		const others = (await board()).sessions.find((s) => s.code === 'S01');
		await expect(takeOut(database.db, house.contributor, others?.files[0].uploadId ?? '')).rejects.toMatchObject({ kind: 'not-found' });
		await expect(placeInSession(database.db, jobs, house.contributor, receipt.uploadId, others?.sessionId ?? '')).rejects.toMatchObject({ kind: 'not-found' });
		await expect(describeSession(database.db, house.contributor, house.study.id, seen.sessions[0].sessionId, { activity: null })).rejects.toMatchObject({ kind: 'not-allowed' });
	});

	it('upload as a contributor only with a participant code', async () => {
		await database.sql`update participant set member_id = null`;
		await expect(bring([sessionFiles({ seed: 1 }).watch], house.contributor)).rejects.toThrow(/No participant code is yours/);
	});

	it('overrule what the team has said about a device: not a contributor', async () => {
		await bringSession();
		const files = sessionFiles({ seed: 5, wearer: 'p08', startS: Date.UTC(2026, 9, 18, 7, 0) / 1000 });
		const [watch] = await bring([files.watch], house.contributor);
		await answer(watch.uploadId, 2, house.contributor);
		await bring([sessionFiles({ seed: 6, startS: Date.UTC(2026, 9, 19, 7, 0) / 1000 }).watch]);
		const [newest] = (await board()).sessions;
		expect(newest.files[0].recording?.deviceModelId).toBe(house.models[1]);
	});
});
