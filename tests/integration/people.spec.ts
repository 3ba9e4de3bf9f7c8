import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { and, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { startMailCatcher, type MailCatcher } from '../../src/cli/local/mail-catcher';
import { DEFAULT_PLAN } from '../../src/lib/agreement/plan';
import { DEFAULT_TAG_KINDS } from '../../src/lib/agreement/tag-kinds';
import { demoPeople, openDemoSession } from '../../src/lib/server/auth/demo';
import { membershipsOf } from '../../src/lib/server/auth/membership';
import { auditEntries, members, participants, tagKinds, users } from '../../src/lib/server/db/schema';
import type { CaughtMail } from '../../src/lib/server/mail/caught';
import { loadSettings } from '../../src/lib/server/settings';
import { createStudy } from '../../src/lib/server/study/create';
import { studyList } from '../../src/lib/server/study/list';
import { amendPlan, planVersions } from '../../src/lib/server/study/plans';
import { studyHead } from '../../src/lib/server/study/study';
import { changeRole, invite, linkParticipant, peopleOf, removeMember } from '../../src/lib/server/team/people';
import { acceptInvitation, createTeam, openInvitations } from '../../src/lib/server/team/team';
import { benchHouse, type BenchHouse } from '../support/bench-house';
import { freshDatabase, type FreshDatabase } from '../support/database';

let database: FreshDatabase;
let house: BenchHouse;
let mail: MailCatcher;
const caught: CaughtMail[] = [];

beforeAll(async () => {
	database = await freshDatabase();
	house = await benchHouse(database.db);
	mail = await startMailCatcher(mkdtempSync(join(tmpdir(), 'nonius-mail-')), (m) => caught.push(m));
});
afterAll(async () => {
	await mail.stop();
	await database.drop();
});

const settings = () =>
	loadSettings({ DATABASE_URL: database.url, SMTP_URL: mail.smtpUrl, ORIGIN: 'http://127.0.0.1:4180', AUTH_SECRET: 'x'.repeat(32) });

async function person(email: string) {
	const [user] = await database.db.insert(users).values({ email }).returning();
	return { id: user.id, email: user.email, name: user.name, theme: user.theme };
}

describe('a new team', () => {
	test('has its maker as owner, its own tag kinds, and an entry in the record', async () => {
		const user = await person('new.owner@elsewhere.example');
		const { slug } = await createTeam(database.db, user, { name: 'Östra Bench', initials: 'nö' });
		expect(slug).toBe('ostra-bench');
		const [membership] = await membershipsOf(database.db, user.id);
		expect(membership).toMatchObject({ role: 'owner', initials: 'NÖ', teamName: 'Östra Bench' });
		const kinds = await database.db.select().from(tagKinds).where(eq(tagKinds.teamId, membership.teamId));
		expect(kinds.map((k) => k.key).sort()).toEqual(DEFAULT_TAG_KINDS.map((k) => k.key).sort());
		expect((await database.db.select().from(auditEntries).where(eq(auditEntries.teamId, membership.teamId))).map((e) => e.action)).toEqual(['team.created']);
	});

	test('gets another address when the name is taken', async () => {
		const { slug } = await createTeam(database.db, await person('second@elsewhere.example'), { name: 'Östra bench!', initials: 'ZW' });
		expect(slug).toBe('ostra-bench-2');
	});
});

describe('invitations', () => {
	test('go out by mail, lead into the team with the role given, and work once', async () => {
		await invite(database.db, settings(), house.owner, { email: 'Guest@Elsewhere.example', role: 'reviewer', initials: 'gu' });
		expect(caught.at(-1)).toMatchObject({ to: 'guest@elsewhere.example' });
		expect(caught.at(-1)?.text).toContain('as reviewer');
		expect(caught.at(-1)?.text).toContain('You get this mail because');
		const guest = await person('guest@elsewhere.example');
		const [open] = await openInvitations(database.db, guest);
		expect(open).toMatchObject({ teamName: 'Bramling Bench', role: 'reviewer' });
		await acceptInvitation(database.db, guest, open.id);
		expect(await membershipsOf(database.db, guest.id)).toMatchObject([{ role: 'reviewer', initials: 'GU' }]);
		await expect(acceptInvitation(database.db, guest, open.id)).rejects.toMatchObject({ kind: 'not-found' });
	});

	test('of another address cannot be used', async () => {
		await invite(database.db, settings(), house.owner, { email: 'wanted@elsewhere.example', role: 'analyst', initials: 'WA' });
		const wanted = await person('wanted@elsewhere.example');
		const [open] = await openInvitations(database.db, wanted);
		const other = await person('other@elsewhere.example');
		expect(await openInvitations(database.db, other)).toEqual([]);
		await expect(acceptInvitation(database.db, other, open.id)).rejects.toMatchObject({ kind: 'not-found' });
	});

	test('that cannot be mailed leave nothing behind', async () => {
		const broken = { ...settings(), smtpUrl: 'smtp://127.0.0.1:1' };
		await expect(invite(database.db, broken, house.owner, { email: 'never@elsewhere.example', role: 'reader', initials: 'NE' })).rejects.toThrow();
		expect((await peopleOf(database.db, house.owner)).invited.map((i) => i.email)).not.toContain('never@elsewhere.example');
	});

	test('are refused to everybody but owners', async () => {
		for (const actor of [house.analyst, house.contributor, house.reader])
			await expect(invite(database.db, settings(), actor, { email: 'a@b.example', role: 'reader', initials: 'AB' })).rejects.toMatchObject({ kind: 'not-allowed' });
	});
});

describe('roles and leaving', () => {
	test('the last owner can neither leave nor become something else', async () => {
		await expect(changeRole(database.db, house.owner, house.owner.memberId, 'analyst')).rejects.toMatchObject({ kind: 'conflict' });
		await expect(removeMember(database.db, house.owner, house.owner.memberId)).rejects.toMatchObject({ kind: 'conflict' });
	});

	test('a role change stands in the record with from and to', async () => {
		await changeRole(database.db, house.owner, house.reader.memberId, 'reviewer');
		const [entry] = await database.db.select().from(auditEntries).where(and(eq(auditEntries.subjectId, house.reader.memberId), eq(auditEntries.action, 'member.role-changed')));
		expect(entry.detail).toMatchObject({ from: 'reader', to: 'reviewer' });
		await changeRole(database.db, house.owner, house.reader.memberId, 'reader');
	});

	test('nobody reaches into another team', async () => {
		await expect(changeRole(database.db, house.stranger, house.reader.memberId, 'owner')).rejects.toMatchObject({ kind: 'not-found' });
		await expect(removeMember(database.db, house.stranger, house.reader.memberId)).rejects.toMatchObject({ kind: 'not-found' });
		expect((await peopleOf(database.db, house.stranger)).people.map((p) => p.initials)).toEqual(['ZZ']);
	});

	test('who leaves loses the way in; what was written stays, and coming back is being the same member', async () => {
		const guest = await person('leaver@elsewhere.example');
		await invite(database.db, settings(), house.owner, { email: guest.email, role: 'analyst', initials: 'LE' });
		const [open] = await openInvitations(database.db, guest);
		await acceptInvitation(database.db, guest, open.id);
		const [before] = await membershipsOf(database.db, guest.id);
		await removeMember(database.db, house.owner, before.memberId);
		expect(await membershipsOf(database.db, guest.id)).toEqual([]);
		expect(await database.db.select().from(members).where(eq(members.id, before.memberId))).toHaveLength(1);
		await invite(database.db, settings(), house.owner, { email: guest.email, role: 'reader', initials: 'LE' });
		const [again] = await openInvitations(database.db, guest);
		await acceptInvitation(database.db, guest, again.id);
		expect(await membershipsOf(database.db, guest.id)).toMatchObject([{ memberId: before.memberId, role: 'reader' }]);
	});

	test('a participant code belongs to one member', async () => {
		await expect(linkParticipant(database.db, house.owner, house.analyst.memberId, 'P08')).rejects.toMatchObject({ kind: 'conflict' });
		await linkParticipant(database.db, house.owner, house.analyst.memberId, 'p21');
		const [row] = await database.db.select().from(participants).where(and(eq(participants.teamId, house.owner.teamId), eq(participants.code, 'P21')));
		expect(row.memberId).toBe(house.analyst.memberId);
	});
});

describe('studies and plans', () => {
	const input = {
		title: 'Winter study',
		question: '',
		activities: ['Indoor cycling'],
		reference: { name: 'Halden ECG strap', placement: 'chest' },
		wearables: [{ name: 'Corvane S', placement: 'wrist' }]
	};

	test('a study is made with its devices in order and the first version of its plan, and stays within its team', async () => {
		const { slug } = await createStudy(database.db, house.analyst, input);
		const head = await studyHead(database.db, house.analyst, slug);
		expect(head.devices.map((d) => [d.number, d.name])).toEqual([[0, 'Halden ECG strap'], [1, 'Corvane S']]);
		await expect(studyHead(database.db, house.stranger, slug)).rejects.toMatchObject({ kind: 'not-found' });
		expect((await studyList(database.db, house.stranger)).map((s) => s.slug)).not.toContain(slug);
	});

	test('readers and contributors cannot make one; a device twice is refused', async () => {
		await expect(createStudy(database.db, house.reader, input)).rejects.toMatchObject({ kind: 'not-allowed' });
		await expect(createStudy(database.db, house.contributor, input)).rejects.toMatchObject({ kind: 'not-allowed' });
		await expect(createStudy(database.db, house.owner, { ...input, wearables: [...input.wearables, ...input.wearables] })).rejects.toMatchObject({ kind: 'invalid' });
	});

	test('plans grow by versions; two people at once: the second is told', async () => {
		const { id } = await createStudy(database.db, house.owner, { ...input, title: 'Plan study' });
		const amended = { ...DEFAULT_PLAN, minSessions: 8 };
		expect(await amendPlan(database.db, house.analyst, id, 1, amended, 'More sessions before a verdict', DEFAULT_TAG_KINDS)).toBe(2);
		await expect(amendPlan(database.db, house.owner, id, 1, amended, 'Late', DEFAULT_TAG_KINDS)).rejects.toMatchObject({ kind: 'conflict' });
		await expect(amendPlan(database.db, house.owner, id, 2, { ...amended, gridS: 7 }, 'Wrong grid', DEFAULT_TAG_KINDS)).rejects.toMatchObject({ kind: 'invalid' });
		await expect(amendPlan(database.db, house.owner, id, 2, amended, ' ', DEFAULT_TAG_KINDS)).rejects.toMatchObject({ kind: 'invalid' });
		await expect(amendPlan(database.db, house.reader, id, 2, amended, 'No', DEFAULT_TAG_KINDS)).rejects.toMatchObject({ kind: 'not-allowed' });
		expect((await planVersions(database.db, house.owner, id)).map((v) => v.version)).toEqual([2, 1]);
	});

	test('the database itself refuses to change a plan or an entry of the record', async () => {
		await expect(database.sql`update analysis_plan set body = '{}'`).rejects.toThrow(/never changed/);
		await expect(database.sql`update audit_entry set action = 'x'`).rejects.toThrow(/never changed/);
		await expect(database.sql`delete from audit_entry`).rejects.toThrow(/never removed/);
	});
});

describe('one-click sign-in', () => {
	test('opens a session for demo people only', async () => {
		await expect(openDemoSession(database.db, 'guest@elsewhere.example')).rejects.toMatchObject({ kind: 'not-allowed' });
		await database.db.update(users).set({ email: 'rt@bramling.example' }).where(eq(users.id, house.owner.userId));
		expect((await demoPeople(database.db)).map((p) => p.email)).toEqual(['rt@bramling.example']);
		const { token, expires } = await openDemoSession(database.db, 'rt@bramling.example');
		expect(token).toHaveLength(64);
		expect(expires.getTime()).toBeGreaterThan(Date.now());
	});
});
