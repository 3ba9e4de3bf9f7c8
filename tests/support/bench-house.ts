/** A small team with one study, for tests: an owner, an analyst, a contributor who is P08, and a stranger of another team. */
import type { Actor } from '../../src/lib/server/auth/actor';
import type { Database } from '../../src/lib/server/db/client';
import { deviceModels, members, participants, studies, studyDevices, teams, users } from '../../src/lib/server/db/schema';
import type { Role } from '../../src/lib/roles';

export interface BenchHouse {
	owner: Actor;
	analyst: Actor;
	contributor: Actor;
	reader: Actor;
	/** Owner of another team. */
	stranger: Actor;
	study: { id: string; title: string };
	strangerStudy: { id: string; title: string };
	/** Model ids: 0 the strap, then the wearables. */
	models: string[];
}

const DEVICES = [
	{ name: 'Halden ECG strap', shortName: 'Halden', role: 'reference', placement: 'chest' },
	{ name: 'Wrenna Loop 2', shortName: 'Wrenna', role: 'wearable', placement: 'wrist' },
	{ name: 'Ostrel Band', shortName: 'Ostrel', role: 'wearable', placement: 'upper arm' }
] as const;

export async function benchHouse(db: Database): Promise<BenchHouse> {
	const house = await team(db, 'Bramling Bench', 'bramling-bench');
	const other = await team(db, 'Other House', 'other-house');
	const person = (initials: string, role: Role) => member(db, house, initials, role);
	const [owner, analyst, contributor, reader] = [await person('RT', 'owner'), await person('KM', 'analyst'), await person('JA', 'contributor'), await person('LV', 'reader')];
	const stranger = await member(db, other, 'ZZ', 'owner');
	await db.insert(participants).values([
		{ teamId: house.id, code: 'P03' },
		{ teamId: house.id, code: 'P08', memberId: contributor.memberId }
	]);
	const made = await study(db, house.id);
	const { study: strangerStudy } = await study(db, other.id);
	return { owner, analyst, contributor, reader, stranger, study: made.study, strangerStudy, models: made.models };
}

async function team(db: Database, name: string, slug: string) {
	const [row] = await db.insert(teams).values({ name, slug }).returning();
	return row;
}

async function member(db: Database, house: { id: string; name: string; slug: string }, initials: string, role: Role): Promise<Actor> {
	const [user] = await db.insert(users).values({ email: `${initials.toLowerCase()}@${house.slug}.example`, name: initials }).returning();
	const [row] = await db.insert(members).values({ teamId: house.id, userId: user.id, role, initials }).returning();
	return { userId: user.id, memberId: row.id, teamId: house.id, teamSlug: house.slug, teamName: house.name, role, initials };
}

async function study(db: Database, teamId: string) {
	const [row] = await db.insert(studies).values({ teamId, slug: 'autumn', title: 'Autumn trail study', activities: ['Hill running', 'Indoor cycling'] }).returning();
	const models: string[] = [];
	for (const [number, device] of DEVICES.entries()) {
		const [model] = await db.insert(deviceModels).values({ teamId, ...device }).returning();
		await db.insert(studyDevices).values({ teamId, studyId: row.id, deviceModelId: model.id, number });
		models.push(model.id);
	}
	return { study: { id: row.id, title: row.title }, models };
}
