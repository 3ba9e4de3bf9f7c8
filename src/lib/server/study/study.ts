/** A study with its devices, as every page of the study needs it. */
import { and, asc, count, eq } from 'drizzle-orm';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { deviceModels, sessions, studies, studyDevices } from '../db/schema';
import { notFound } from '../errors';

export interface StudyDevice {
	number: number;
	modelId: string;
	name: string;
	shortName: string;
	placement: string;
}

export interface StudyHead {
	study: { id: string; slug: string; title: string; question: string; activities: string[] };
	/** Number 0 is the reference. */
	devices: StudyDevice[];
	/** Sessions that wait for review. */
	toReview: number;
}

/** @throws DomainError not-found when the team has no study of this name */
export async function studyHead(db: Queryable, actor: Actor, slug: string): Promise<StudyHead> {
	const [study] = await db
		.select({ id: studies.id, slug: studies.slug, title: studies.title, question: studies.question, activities: studies.activities })
		.from(studies)
		.where(and(eq(studies.teamId, actor.teamId), eq(studies.slug, slug)));
	if (!study) throw notFound('This study');
	const devices = await db
		.select({ number: studyDevices.number, modelId: deviceModels.id, name: deviceModels.name, shortName: deviceModels.shortName, placement: deviceModels.placement })
		.from(studyDevices)
		.innerJoin(deviceModels, eq(deviceModels.id, studyDevices.deviceModelId))
		.where(and(eq(studyDevices.teamId, actor.teamId), eq(studyDevices.studyId, study.id)))
		.orderBy(asc(studyDevices.number));
	const [{ waiting }] = await db
		.select({ waiting: count() })
		.from(sessions)
		.where(and(eq(sessions.teamId, actor.teamId), eq(sessions.studyId, study.id), eq(sessions.state, 'in review')));
	return { study, devices, toReview: waiting };
}
