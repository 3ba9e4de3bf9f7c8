/** From hand-in to decision and back: who may, what is closed meanwhile, and what the database refuses by itself. */
import { randomUUID } from 'node:crypto';
import { and, asc, eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { auditEntries, reviews, sessions } from '../../src/lib/server/db/schema';
import { DomainError } from '../../src/lib/server/errors';
import { decideReview } from '../../src/lib/server/review/decide';
import { reopenSession, submitSession, takeBack } from '../../src/lib/server/review/hand-in';
import { reviewQueue } from '../../src/lib/server/review/queue';
import { saveAlignment } from '../../src/lib/server/session/alignment';
import { sessionDocumentById } from '../../src/lib/server/session/document';
import { saveTag, type TagToSave } from '../../src/lib/server/session/tag';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { addSession, memberOf, sessionOnBench, START_S, type SessionOnBench } from '../support/session-on-bench';
import type { Actor } from '../../src/lib/server/auth/actor';

let database: FreshDatabase;
let on: SessionOnBench;
let sessionId: string;
let watch: string;
let count = 1;

const nextCode = () => `S${String(++count).padStart(2, '0')}`;

beforeAll(async () => {
	database = await freshDatabase();
	on = await sessionOnBench(database.db);
});
afterAll(() => database.drop());
beforeEach(async () => {
	const made = await addSession(database.db, on.house, nextCode(), { reliable: [true, true] });
	sessionId = made.sessionId;
	watch = made.recordingIds[1];
});

const tagOn = (more: Partial<TagToSave> = {}): TagToSave => ({ recordingId: watch, kind: 'cadence-lock', startS: START_S + 60, endS: START_S + 90, status: 'accepted', cleanedOverride: null, note: '', ...more });
const addTag = (actor: Actor) => saveTag(database.db, actor, sessionId, randomUUID(), 0, tagOn());
const stateOf = async () => (await database.db.select().from(sessions).where(eq(sessions.id, sessionId)))[0].state;
const roundsOf = () => database.db.select().from(reviews).where(eq(reviews.sessionId, sessionId)).orderBy(asc(reviews.round));

async function refusal(work: Promise<unknown>): Promise<DomainError> {
	try {
		await work;
	} catch (thrown) {
		if (thrown instanceof DomainError) return thrown;
		throw thrown;
	}
	throw new Error('This was not refused.');
}

describe('handing in', () => {
	it('closes the session: nobody changes a tag or an offset until it is decided', async () => {
		const { db } = database;
		await addTag(on.house.analyst);
		await submitSession(db, on.house.analyst, sessionId, 'Two locks, both clear.');
		expect(await stateOf()).toBe('in review');
		for (const actor of [on.house.analyst, on.house.owner]) {
			expect((await refusal(saveAlignment(db, actor, watch, 1, { offsetS: 4, driftPpm: 0, locked: false, method: 'hand' }))).sentence).toContain('in review');
			expect((await refusal(saveTag(db, actor, sessionId, randomUUID(), 0, tagOn()))).sentence).toContain('in review');
		}
		expect((await refusal(submitSession(db, on.house.analyst, sessionId, ''))).kind).toBe('conflict');
		expect((await sessionDocumentById(db, on.house.analyst, sessionId)).can).toEqual({ align: false, annotate: false, submit: false, review: false, takeBack: true, reopen: false });
	});

	it('is refused while an offset is not decided, and names it; deciding it by hand opens the way', async () => {
		const { db } = database;
		const held = await addSession(db, on.house, nextCode(), { reliable: [true, false] });
		sessionId = held.sessionId;
		expect((await refusal(submitSession(db, on.house.analyst, sessionId, ''))).sentence).toContain('Ostrel Band');
		await saveAlignment(db, on.house.analyst, held.recordingIds[2], 1, { offsetS: -0.5, driftPpm: 0, locked: true, method: 'hand' });
		await submitSession(db, on.house.analyst, sessionId, '');
		expect(await stateOf()).toBe('in review');
	});

	it('is for owners and analysts', async () => {
		for (const actor of [on.reviewer, on.house.reader, on.house.contributor]) expect((await refusal(submitSession(database.db, actor, sessionId, ''))).kind).toBe('not-allowed');
		expect((await refusal(submitSession(database.db, on.house.stranger, sessionId, ''))).kind).toBe('not-found');
	});
});

describe('deciding', () => {
	beforeEach(async () => {
		await addTag(on.house.analyst);
		await submitSession(database.db, on.house.analyst, sessionId, '');
	});

	it('vouches with the reviewer’s name in the round and in the record, and keeps the session closed', async () => {
		const { db } = database;
		await decideReview(db, on.reviewer, sessionId, 'approved', 'Clean work.');
		expect(await stateOf()).toBe('reviewed');
		expect(await roundsOf()).toMatchObject([{ round: 1, submittedBy: on.house.analyst.memberId, reviewerId: on.reviewer.memberId, decision: 'approved', comment: 'Clean work.' }]);
		const entries = await db.select().from(auditEntries).where(and(eq(auditEntries.subjectId, sessionId), eq(auditEntries.action, 'session.approved')));
		expect(entries).toMatchObject([{ actorInitials: 'SO' }]);
		expect((await refusal(addTag(on.house.analyst))).sentence).toContain('reviewed');
		expect((await refusal(decideReview(db, on.house.owner, sessionId, 'returned', 'x'))).kind).toBe('conflict');
	});

	it('hands back with a comment, never without one, and the next hand-in is a further round', async () => {
		const { db } = database;
		expect((await refusal(decideReview(db, on.reviewer, sessionId, 'returned', '  '))).sentence).toContain('comment');
		await decideReview(db, on.reviewer, sessionId, 'returned', 'The lock goes on until 07:36.');
		expect(await stateOf()).toBe('returned');
		await addTag(on.house.analyst);
		expect(await stateOf()).toBe('returned');
		await submitSession(db, on.house.analyst, sessionId, 'Done.');
		await decideReview(db, on.reviewer, sessionId, 'approved', '');
		expect((await roundsOf()).map((r) => [r.round, r.decision])).toEqual([[1, 'returned'], [2, 'approved']]);
	});

	it('never on own work: refused for who handed it in, and for whoever wrote in it this round, owner or not', async () => {
		const { db } = database;
		expect((await refusal(decideReview(db, on.house.analyst, sessionId, 'approved', ''))).sentence).toContain('own work');
		await takeBack(db, on.house.owner, sessionId);
		await saveAlignment(db, on.house.owner, watch, 1, { offsetS: 3.5, driftPpm: 0, locked: false, method: 'hand' });
		await submitSession(db, on.colleague, sessionId, '');
		for (const actor of [on.house.analyst, on.house.owner, on.colleague]) expect((await refusal(decideReview(db, actor, sessionId, 'approved', ''))).kind).toBe('not-allowed');
		await decideReview(db, on.reviewer, sessionId, 'approved', '');
	});

	it('a reviewer who wrote nothing since the last decision may decide again; an author of an earlier round too', async () => {
		const { db } = database;
		await takeBack(db, on.house.analyst, sessionId);
		await addTag(on.colleague);
		await submitSession(db, on.house.analyst, sessionId, '');
		expect((await refusal(decideReview(db, on.colleague, sessionId, 'approved', ''))).kind).toBe('not-allowed');
		await decideReview(db, on.reviewer, sessionId, 'returned', 'Again.');
		await submitSession(db, on.house.analyst, sessionId, '');
		await decideReview(db, on.colleague, sessionId, 'approved', '');
		expect(await stateOf()).toBe('reviewed');
	});

	it('is for those whose role reviews, of this team', async () => {
		for (const actor of [on.house.reader, on.house.contributor]) expect((await refusal(decideReview(database.db, actor, sessionId, 'approved', ''))).kind).toBe('not-allowed');
		expect((await refusal(decideReview(database.db, on.house.stranger, sessionId, 'approved', ''))).kind).toBe('not-found');
	});

	it('by two reviewers at the same moment counts once', async () => {
		const second = await memberOf(database.db, on.house, `R${count}`, 'reviewer');
		const both = await Promise.allSettled([decideReview(database.db, on.reviewer, sessionId, 'approved', ''), decideReview(database.db, second, sessionId, 'returned', 'No.')]);
		expect(both.map((b) => b.status).sort()).toEqual(['fulfilled', 'rejected']);
		expect(await roundsOf()).toHaveLength(1);
	});
});

describe('the database by itself', () => {
	const decideIn = (reviewerId: string) => database.db.update(reviews).set({ reviewerId, decision: 'approved', decidedAt: new Date() }).where(eq(reviews.sessionId, sessionId));
	const cause = async (work: Promise<unknown>) => {
		const failed: unknown = await work.then(
			() => null,
			(e: unknown) => e
		);
		return failed instanceof Error && failed.cause instanceof Error ? failed.cause.message : String(failed);
	};

	it('refuses a decision by the submitter, by the annotator, and by an author of this round', async () => {
		await addTag(on.house.analyst);
		await addTag(on.colleague);
		await submitSession(database.db, on.house.owner, sessionId, '');
		expect(await cause(decideIn(on.house.owner.memberId))).toContain('review_not_own_work');
		expect(await cause(decideIn(on.house.analyst.memberId))).toContain('own work');
		expect(await cause(decideIn(on.colleague.memberId))).toContain('own work');
		await decideIn(on.reviewer.memberId);
	});

	it('refuses a second open round and a return without a word', async () => {
		await submitSession(database.db, on.house.analyst, sessionId, '');
		const second = database.db.insert(reviews).values({ teamId: on.house.owner.teamId, sessionId, round: 2, submittedBy: on.house.analyst.memberId });
		expect(await cause(second)).toContain('review_one_open');
		const silent = database.db.update(reviews).set({ reviewerId: on.reviewer.memberId, decision: 'returned', decidedAt: new Date() }).where(eq(reviews.sessionId, sessionId));
		expect(await cause(silent)).toContain('review_return_says_why');
	});
});

describe('taking back and opening again', () => {
	it('taking back opens the session, keeps the round in the record, and ends the chance to decide', async () => {
		const { db } = database;
		await submitSession(db, on.house.analyst, sessionId, '');
		expect((await refusal(takeBack(db, on.reviewer, sessionId))).kind).toBe('not-allowed');
		await takeBack(db, on.house.analyst, sessionId);
		expect(await stateOf()).toBe('annotating');
		expect((await refusal(decideReview(db, on.reviewer, sessionId, 'approved', ''))).kind).toBe('conflict');
		expect((await refusal(takeBack(db, on.house.analyst, sessionId))).kind).toBe('conflict');
		await submitSession(db, on.house.analyst, sessionId, '');
		expect((await roundsOf()).map((r) => [r.round, r.takenBackAt !== null])).toEqual([[1, true], [2, false]]);
	});

	it('opening again needs a reason, which the record keeps beside the decision', async () => {
		const { db } = database;
		await submitSession(db, on.house.analyst, sessionId, '');
		await decideReview(db, on.reviewer, sessionId, 'approved', '');
		expect((await refusal(reopenSession(db, on.house.owner, sessionId, ' '))).kind).toBe('invalid');
		expect((await refusal(reopenSession(db, on.reviewer, sessionId, 'x'))).kind).toBe('not-allowed');
		await reopenSession(db, on.house.owner, sessionId, 'The maker sent a corrected file.');
		expect(await stateOf()).toBe('annotating');
		await addTag(on.house.analyst);
		const [entry] = await db.select().from(auditEntries).where(and(eq(auditEntries.subjectId, sessionId), eq(auditEntries.action, 'session.reopened')));
		expect(entry.detail).toMatchObject({ reason: 'The maker sent a corrected file.' });
		expect((await roundsOf())[0].decision).toBe('approved');
	});
});

describe('the review queue', () => {
	it('says of each session whether it waits for you, and of your own work that a colleague decides', async () => {
		const { db } = database;
		await addTag(on.house.analyst);
		await submitSession(db, on.house.analyst, sessionId, 'Two locks.');
		const { code } = await sessionDocumentById(db, on.house.analyst, sessionId);
		const entryFor = async (actor: Actor) => (await reviewQueue(db, actor, on.house.study.id)).find((e) => e.code === code);
		expect(await entryFor(on.reviewer)).toMatchObject({ standing: 'to decide', handedInBy: 'KM', submitNote: 'Two locks.', acceptedTags: 1, openProposals: 0, mine: false });
		expect(await entryFor(on.house.analyst)).toMatchObject({ standing: 'with a colleague', why: 'Your own work: a colleague decides.', mine: true });
		expect(await entryFor(on.house.reader)).toMatchObject({ standing: 'with a colleague', why: 'A reviewer decides.' });
		expect(await entryFor(on.house.contributor)).toBeUndefined();
		expect(await reviewQueue(db, on.house.stranger, on.house.study.id)).toEqual([]);
		await decideReview(db, on.reviewer, sessionId, 'returned', 'Look at 07:36.');
		expect(await entryFor(on.house.analyst)).toMatchObject({ standing: 'handed back', decidedBy: 'SO', comment: 'Look at 07:36.', mine: true });
	});
});
