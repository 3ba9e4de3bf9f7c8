import { eq, isNotNull } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { seedDemo } from '../../src/cli/seed';
import { SESSIONS } from '../../src/cli/seed/scenario';
import { members, participants, recordings, reviews, sessions, uploads } from '../../src/lib/server/db/schema';
import { ROLES } from '../../src/lib/roles';
import { freshDatabase, type FreshDatabase } from '../support/database';

let database: FreshDatabase;
beforeAll(async () => {
	database = await freshDatabase();
	await seedDemo(database.db);
}, 180_000);
afterAll(() => database?.drop());

describe('the demo content', () => {
	it('has every session where the scenario says that the work on it stands', async () => {
		const rows = await database.db
			.select({ code: sessions.code, state: sessions.state, activity: sessions.activity, wearer: participants.code })
			.from(sessions)
			.leftJoin(participants, eq(participants.id, sessions.participantId))
			.orderBy(sessions.code);
		expect(rows).toEqual(SESSIONS.map((s, i) => ({ code: `S${String(i + 1).padStart(2, '0')}`, state: s.state, activity: s.activity, wearer: s.wearer })));
	});
	it('has somebody of every role', async () => {
		const rows = await database.db.select({ role: members.role }).from(members);
		expect(rows.map((r) => r.role).sort()).toEqual([...ROLES].sort());
	});
	it('has no session that was decided by who handed it in', async () => {
		const decided = await database.db.select().from(reviews).where(isNotNull(reviews.decision));
		expect(decided.length).toBeGreaterThan(10);
		for (const review of decided) expect(review.reviewerId).not.toBe(review.submittedBy);
	});
	it('shows a file that asks for its device, one without heart rate and a duplicate', async () => {
		const open = await database.db.select({ state: uploads.state, code: uploads.messageCode }).from(uploads).where(eq(uploads.state, 'asking'));
		expect(open).toEqual([{ state: 'asking', code: 'which-device' }]);
		const refused = await database.db.select({ code: uploads.messageCode, raw: uploads.rawFileId }).from(uploads).where(eq(uploads.state, 'refused'));
		expect(refused.map((r) => r.code).sort()).toEqual(['duplicate', 'no-heart-rate']);
		expect(refused.every((r) => r.raw === null)).toBe(true);
	});
	it('came in through the readers: every recording names its reader and keeps its bytes', async () => {
		const rows = await database.db.select({ format: recordings.format, readerVersion: recordings.readerVersion }).from(recordings);
		expect(new Set(rows.map((r) => r.format))).toEqual(new Set(['fit', 'tcx', 'csv', 'gpx']));
		expect(rows.every((r) => r.readerVersion.length > 0)).toBe(true);
	});
});
