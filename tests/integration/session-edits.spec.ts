/** Offsets and tags on the server: versions, conflicts, who may, and what is closed. */
import { randomUUID } from 'node:crypto';
import { and, asc, eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { alignments, annotationVersions, auditEntries, sessions } from '../../src/lib/server/db/schema';
import { DomainError } from '../../src/lib/server/errors';
import { saveAlignment, type AlignmentToSave } from '../../src/lib/server/session/alignment';
import { sessionDocument } from '../../src/lib/server/session/document';
import { saveTag, type TagToSave } from '../../src/lib/server/session/tag';
import { sessionTraces, tracesTag } from '../../src/lib/server/session/traces';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { addSession, sessionOnBench, START_S, type SessionOnBench } from '../support/session-on-bench';

let database: FreshDatabase;
let on: SessionOnBench;
let sessionId: string;
let watch: string;
let count = 1;

beforeAll(async () => {
	database = await freshDatabase();
	on = await sessionOnBench(database.db);
});
afterAll(() => database.drop());
beforeEach(async () => {
	const made = await addSession(database.db, on.house, `S${String(++count).padStart(2, '0')}`, { reliable: [true, true] });
	sessionId = made.sessionId;
	watch = made.recordingIds[1];
});

const byHand = (offsetS: number, more: Partial<AlignmentToSave> = {}): AlignmentToSave => ({ offsetS, driftPpm: 0, locked: false, method: 'hand', ...more });
const tagOn = (recordingId: string, more: Partial<TagToSave> = {}): TagToSave => ({ recordingId, kind: 'cadence-lock', startS: START_S + 60, endS: START_S + 90, status: 'accepted', cleanedOverride: null, note: '', ...more });
const versionsOf = (recordingId: string) => database.db.select().from(alignments).where(eq(alignments.recordingId, recordingId)).orderBy(asc(alignments.version));
const stateOf = async () => (await database.db.select().from(sessions).where(eq(sessions.id, sessionId)))[0];

async function refusal(work: Promise<unknown>): Promise<DomainError> {
	try {
		await work;
	} catch (thrown) {
		if (thrown instanceof DomainError) return thrown;
		throw thrown;
	}
	throw new Error('This was not refused.');
}

describe('an offset', () => {
	it('is a further version with its author, keeps what the search found, and stands in the record', async () => {
		const { db } = database;
		expect(await saveAlignment(db, on.house.analyst, watch, 1, byHand(3.6))).toMatchObject({ version: 2 });
		const [first, second] = await versionsOf(watch);
		expect(first).toMatchObject({ version: 1, offsetS: 3.4237, authorId: null });
		expect(second).toMatchObject({ version: 2, offsetS: 3.6, authorId: on.house.analyst.memberId });
		expect(second.estimate).toEqual(first.estimate);
		const [entry] = await db.select().from(auditEntries).where(and(eq(auditEntries.subjectId, watch), eq(auditEntries.action, 'alignment.changed')));
		expect(entry).toMatchObject({ actorInitials: 'KM', detail: { from: { offsetS: 3.4237 }, to: { offsetS: 3.6 } } });
	});

	it('of a colleague is never overwritten unseen: the second one gets both', async () => {
		await saveAlignment(database.db, on.house.analyst, watch, 1, byHand(3.6));
		const refused = await refusal(saveAlignment(database.db, on.colleague, watch, 1, byHand(9)));
		expect(refused.kind).toBe('conflict');
		expect(refused.detail.theirs).toMatchObject({ version: 2, authorInitials: 'KM', content: { of: 'alignment', offsetS: 3.6 } });
		expect(await versionsOf(watch)).toHaveLength(2);
	});

	it('of two people at the same moment gets one version; the other learns of it', async () => {
		const both = await Promise.allSettled([saveAlignment(database.db, on.house.analyst, watch, 1, byHand(3.6)), saveAlignment(database.db, on.colleague, watch, 1, byHand(9))]);
		expect(both.map((b) => b.status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(await versionsOf(watch)).toHaveLength(2);
	});

	it('sent twice, because its answer was lost, is kept once', async () => {
		const edit = byHand(3.6);
		await saveAlignment(database.db, on.house.analyst, watch, 1, edit);
		expect(await saveAlignment(database.db, on.house.analyst, watch, 1, edit)).toMatchObject({ version: 2 });
		expect(await versionsOf(watch)).toHaveLength(2);
	});

	it('that two people set to the same is no conflict: there is nothing to choose', async () => {
		await saveAlignment(database.db, on.house.analyst, watch, 1, byHand(3.6));
		expect(await saveAlignment(database.db, on.colleague, watch, 1, byHand(3.6))).toMatchObject({ version: 2 });
		expect(await versionsOf(watch)).toHaveLength(2);
	});

	it('says honestly where it comes from: “peak”, “candidate” and “proposed” have to be that value', async () => {
		const { db } = database;
		expect((await refusal(saveAlignment(db, on.house.analyst, watch, 1, byHand(9, { method: 'peak' })))).kind).toBe('invalid');
		expect((await refusal(saveAlignment(db, on.house.analyst, watch, 1, byHand(9, { method: 'candidate' })))).kind).toBe('invalid');
		await saveAlignment(db, on.house.analyst, watch, 1, byHand(3.42, { method: 'peak' }));
		await saveAlignment(db, on.house.analyst, watch, 2, byHand(43.42, { method: 'candidate' }));
		expect((await refusal(saveAlignment(db, on.house.analyst, watch, 3, byHand(43.42, { method: 'proposed' })))).kind).toBe('invalid');
		expect(await saveAlignment(db, on.house.analyst, watch, 3, byHand(3.4237, { method: 'proposed' }))).toMatchObject({ version: 4 });
	});

	it('on the reference is refused: its clock is the axis', async () => {
		const [strap] = (await addSession(database.db, on.house, `S${String(++count).padStart(2, '0')}`, { reliable: [true, true] })).recordingIds;
		expect((await refusal(saveAlignment(database.db, on.house.analyst, strap, 0, byHand(1)))).sentence).toContain('axis');
	});

	it('decided by hand makes a session aligned that was held up by it, and its author the annotator', async () => {
		const held = await addSession(database.db, on.house, `S${String(++count).padStart(2, '0')}`, { reliable: [false, true] });
		sessionId = held.sessionId;
		expect((await stateOf()).state).toBe('imported');
		await saveAlignment(database.db, on.house.analyst, held.recordingIds[1], 1, byHand(3.42, { method: 'peak' }));
		expect(await stateOf()).toMatchObject({ state: 'aligned', annotatorId: on.house.analyst.memberId });
	});
});

describe('a tag', () => {
	it('under the page’s own id is made once however often it is sent, and begins the annotating', async () => {
		const id = randomUUID();
		expect((await stateOf()).state).toBe('aligned');
		expect(await saveTag(database.db, on.house.analyst, sessionId, id, 0, tagOn(watch))).toEqual({ version: 1, state: 'annotating' });
		expect(await saveTag(database.db, on.house.analyst, sessionId, id, 0, tagOn(watch))).toMatchObject({ version: 1 });
		expect(await stateOf()).toMatchObject({ state: 'annotating', annotatorId: on.house.analyst.memberId });
	});

	it('keeps every version: changed, removed and back again', async () => {
		const id = randomUUID();
		const { db } = database;
		await saveTag(db, on.house.analyst, sessionId, id, 0, tagOn(watch));
		await saveTag(db, on.house.analyst, sessionId, id, 1, tagOn(watch, { endS: START_S + 92 }));
		await saveTag(db, on.house.analyst, sessionId, id, 2, tagOn(watch, { endS: START_S + 92, status: 'removed' }));
		await saveTag(db, on.house.analyst, sessionId, id, 3, tagOn(watch, { endS: START_S + 92, note: 'back' }));
		const versions = await db.select().from(annotationVersions).where(eq(annotationVersions.annotationId, id)).orderBy(asc(annotationVersions.version));
		expect(versions.map((v) => [v.version, v.endS - START_S, v.status, v.note])).toEqual([[1, 90, 'accepted', ''], [2, 92, 'accepted', ''], [3, 92, 'removed', ''], [4, 92, 'accepted', 'back']]);
		const actions = await db.select({ action: auditEntries.action }).from(auditEntries).where(eq(auditEntries.subjectId, id)).orderBy(asc(auditEntries.id));
		expect(actions.map((a) => a.action)).toEqual(['tag.added', 'tag.changed', 'tag.removed', 'tag.accepted']);
		const { code } = await stateOf();
		const document = await sessionDocument(db, on.house.analyst, 'autumn', code);
		expect(document.tags).toMatchObject([{ id, version: 4, note: 'back', authorInitials: 'KM' }]);
	});

	it('changed by two people is a conflict that carries the other’s version whole', async () => {
		const id = randomUUID();
		await saveTag(database.db, on.house.analyst, sessionId, id, 0, tagOn(watch));
		await saveTag(database.db, on.colleague, sessionId, id, 1, tagOn(watch, { kind: 'half-rate', note: 'x0.5' }));
		const refused = await refusal(saveTag(database.db, on.house.analyst, sessionId, id, 1, tagOn(watch, { endS: START_S + 100 })));
		expect(refused.detail.theirs).toMatchObject({ version: 2, authorInitials: 'BV', content: { of: 'tag', kind: 'half-rate', note: 'x0.5', recordingId: watch } });
	});

	it('is refused on a recording elsewhere, of an unknown kind, too short, or under an id that is taken', async () => {
		const { db } = database;
		const send = (wanted: TagToSave, id = randomUUID()) => refusal(saveTag(db, on.house.analyst, sessionId, id, 0, wanted));
		expect((await send(tagOn(on.recordingIds[1]))).kind).toBe('not-found');
		expect((await send(tagOn(watch, { kind: 'invented' }))).sentence).toContain('no tag kind');
		expect((await send(tagOn(watch, { endS: START_S + 61 }))).sentence).toContain('at least 2 s');
		const taken = randomUUID();
		await saveTag(db, on.house.analyst, on.sessionId, taken, 0, tagOn(on.recordingIds[1]));
		expect((await send(tagOn(watch), taken)).sentence).toContain('elsewhere');
	});

	it('leaves nothing behind when it is refused', async () => {
		const id = randomUUID();
		await refusal(saveTag(database.db, on.house.analyst, sessionId, id, 3, tagOn(watch)));
		expect(await saveTag(database.db, on.house.analyst, sessionId, id, 0, tagOn(watch))).toMatchObject({ version: 1 });
	});
});

describe('who may', () => {
	it('a reader, a contributor and a reviewer read but do not change; another team sees nothing', async () => {
		const { db } = database;
		for (const actor of [on.house.reader, on.house.contributor, on.reviewer]) {
			expect((await refusal(saveAlignment(db, actor, watch, 1, byHand(4)))).kind).toBe('not-allowed');
			expect((await refusal(saveTag(db, actor, sessionId, randomUUID(), 0, tagOn(watch)))).kind).toBe('not-allowed');
		}
		expect((await refusal(saveAlignment(db, on.house.stranger, watch, 1, byHand(4)))).kind).toBe('not-found');
		expect((await refusal(saveTag(db, on.house.stranger, sessionId, randomUUID(), 0, tagOn(watch)))).kind).toBe('not-found');
		expect((await refusal(sessionTraces(db, on.house.stranger, sessionId))).kind).toBe('not-found');
		expect((await refusal(sessionDocument(db, on.house.stranger, 'autumn', (await stateOf()).code))).kind).toBe('not-found');
		expect(await versionsOf(watch)).toHaveLength(1);
	});

	it('a contributor sees the sessions that he or she wore, and no others', async () => {
		const { db } = database;
		const { code } = await stateOf();
		expect((await refusal(sessionDocument(db, on.house.contributor, 'autumn', code))).kind).toBe('not-found');
		const own = `S${String(++count).padStart(2, '0')}`;
		const worn = await addSession(db, on.house, own, { reliable: [true, true], participant: 'P08' });
		const document = await sessionDocument(db, on.house.contributor, 'autumn', own);
		expect(document.can).toEqual({ align: false, annotate: false, submit: false, review: false, takeBack: false, reopen: false });
		expect([document.previousCode, document.nextCode]).toEqual([null, null]);
		expect(await sessionTraces(db, on.house.contributor, worn.sessionId)).toHaveLength(3);
	});
});

describe('the document and the samples', () => {
	it('hold recordings in the order of their numbers, newest offsets, kinds, plan and the neighbours', async () => {
		const { code } = await stateOf();
		const document = await sessionDocument(database.db, on.house.analyst, 'autumn', code);
		expect(document.tracks.map((t) => [t.number, t.role, t.name])).toEqual([[0, 'reference', 'Halden ECG strap'], [1, 'wearable', 'Wrenna Loop 2'], [2, 'wearable', 'Ostrel Band']]);
		expect(document.alignments[watch]).toMatchObject({ version: 1, offsetS: 3.4237, method: 'proposed', locked: false });
		expect(document.kinds.map((k) => k.key)).toContain('cadence-lock');
		expect(document.can).toMatchObject({ align: true, annotate: true, submit: true, review: false });
		expect(document.previousCode).toBe(`S${String(Number(code.slice(1)) - 1).padStart(2, '0')}`);
		expect(document.nextCode).toBeNull();
	});

	it('samples come with a tag that changes only when recordings do', async () => {
		const before = await tracesTag(database.db, on.house.analyst, sessionId);
		await saveAlignment(database.db, on.house.analyst, watch, 1, byHand(5));
		expect(await tracesTag(database.db, on.house.analyst, sessionId)).toBe(before);
		const recordings = await sessionTraces(database.db, on.house.analyst, sessionId);
		expect(recordings[0].traces[0].tS.length).toBeGreaterThan(600);
		expect(await tracesTag(database.db, on.house.analyst, on.sessionId)).not.toBe(before);
	});
});
