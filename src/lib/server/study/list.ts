/** The studies of a team, with how far their sessions have come. */
import { and, asc, count, eq, inArray } from 'drizzle-orm';
import { stageOf, type Stage } from '../../results/session-rows';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { deviceModels, participants, sessions, studies, studyDevices } from '../db/schema';

export interface StudyRow {
	slug: string;
	title: string;
	question: string;
	devices: { number: number; name: string }[];
	stages: Partial<Record<Stage, number>>;
	sessions: number;
}

export async function studyList(db: Queryable, actor: Actor): Promise<StudyRow[]> {
	authorise(actor, 'study.read');
	const rows = await db.select({ id: studies.id, slug: studies.slug, title: studies.title, question: studies.question }).from(studies).where(eq(studies.teamId, actor.teamId)).orderBy(asc(studies.title));
	if (rows.length === 0) return [];
	const ids = rows.map((r) => r.id);
	const devices = await db
		.select({ studyId: studyDevices.studyId, number: studyDevices.number, name: deviceModels.name })
		.from(studyDevices)
		.innerJoin(deviceModels, eq(deviceModels.id, studyDevices.deviceModelId))
		.where(inArray(studyDevices.studyId, ids))
		.orderBy(asc(studyDevices.number));
	const states = await db
		.select({ studyId: sessions.studyId, state: sessions.state, n: count() })
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(and(eq(sessions.teamId, actor.teamId), inArray(sessions.studyId, ids), seesOwnSessionsOnly(actor) ? eq(participants.memberId, actor.memberId) : undefined))
		.groupBy(sessions.studyId, sessions.state);
	return rows.map(({ id, ...row }) => {
		const stages: StudyRow['stages'] = {};
		let total = 0;
		for (const s of states.filter((x) => x.studyId === id)) {
			const stage = stageOf(s.state);
			stages[stage] = (stages[stage] ?? 0) + s.n;
			total += s.n;
		}
		return { ...row, devices: devices.filter((d) => d.studyId === id).map(({ number, name }) => ({ number, name })), stages, sessions: total };
	});
}
