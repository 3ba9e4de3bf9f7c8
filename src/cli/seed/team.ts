/** The scenario's team, people, wearers, devices and study. */
import { eq } from 'drizzle-orm';
import { DEFAULT_PLAN } from '../../lib/agreement/plan';
import type { Actor } from '../../lib/server/auth/actor';
import type { Queryable } from '../../lib/server/db/client';
import { analysisPlans, deviceModels, members, participants, studies, studyDevices, teams, users } from '../../lib/server/db/schema';
import { createTeam } from '../../lib/server/team/team';
import { DEVICES } from './devices';
import { PEOPLE, STUDY, STUDY_ACTIVITIES, TEAM, WEARERS } from './scenario';

export interface DemoTeam {
	study: { id: string; title: string };
	/** By initials. */
	actors: Record<string, Actor>;
	/** Model ids by number. */
	models: string[];
}

export async function makeTeam(db: Queryable): Promise<DemoTeam> {
	const [owner, ...others] = PEOPLE;
	const account = async (person: (typeof PEOPLE)[number]) => {
		const [user] = await db.insert(users).values({ name: person.name, email: person.email, emailVerified: new Date() }).returning({ id: users.id });
		return user.id;
	};
	const ownerId = await account(owner);
	const { slug } = await createTeam(db, { id: ownerId, email: owner.email, name: owner.name, theme: 'system' }, { name: TEAM, initials: owner.initials });
	const [team] = await db.select().from(teams).where(eq(teams.slug, slug));
	for (const person of others) await db.insert(members).values({ teamId: team.id, userId: await account(person), role: person.role, initials: person.initials });

	const everybody = await db.select().from(members).where(eq(members.teamId, team.id));
	const actors = Object.fromEntries(
		everybody.map((m): [string, Actor] => [m.initials, { userId: m.userId, memberId: m.id, teamId: team.id, teamSlug: team.slug, teamName: team.name, role: m.role, initials: m.initials }])
	);
	await db.insert(participants).values(WEARERS.map((w) => ({ teamId: team.id, code: w.code, memberId: w.initials === null ? null : actors[w.initials].memberId })));

	const [study] = await db
		.insert(studies)
		.values({ teamId: team.id, slug: 'autumn-trail-study', title: STUDY.title, question: STUDY.question, activities: STUDY_ACTIVITIES.map((a) => a.name), createdBy: ownerId })
		.returning({ id: studies.id, title: studies.title });
	const models: string[] = [];
	for (const device of DEVICES) {
		const [model] = await db
			.insert(deviceModels)
			.values({ teamId: team.id, name: device.name, shortName: device.shortName, role: device.role, placement: device.placement })
			.returning({ id: deviceModels.id });
		await db.insert(studyDevices).values({ teamId: team.id, studyId: study.id, deviceModelId: model.id, number: device.number });
		models.push(model.id);
	}
	await db.insert(analysisPlans).values({ teamId: team.id, studyId: study.id, version: 1, body: DEFAULT_PLAN, reason: 'Written before the first session.', createdBy: ownerId });
	return { study, actors, models };
}
