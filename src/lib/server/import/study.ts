/** The study that an upload's address names, within the actor's team. */
import { and, eq } from 'drizzle-orm';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { studies } from '../db/schema';
import { notFound } from '../errors';

export async function studyBySlug(db: Queryable, actor: Actor, slug: string): Promise<{ id: string; title: string; slug: string }> {
	authorise(actor, 'study.read');
	const [study] = await db
		.select({ id: studies.id, title: studies.title, slug: studies.slug })
		.from(studies)
		.where(and(eq(studies.teamId, actor.teamId), eq(studies.slug, slug)));
	if (!study) throw notFound('The study');
	return study;
}
