/** Making a study: question, activities, reference and wearables in their order, and the first version of its plan. */
import { and, eq, inArray } from 'drizzle-orm';
import { z } from 'zod';
import { DEFAULT_PLAN } from '../../agreement/plan';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { analysisPlans, deviceModels, studies, studyDevices } from '../db/schema';
import { invalid } from '../errors';
import { record } from '../record/audit';
import { freeSlug, slugFrom } from '../team/team';

export const PLACEMENTS = ['chest', 'wrist', 'forearm', 'upper arm', 'finger', 'ear', 'other'] as const;

const device = z.object({
	name: z.string().trim().min(1, 'Give every device a name.').max(80),
	shortName: z.string().trim().max(20).default(''),
	placement: z.enum(PLACEMENTS)
});

export const newStudySchema = z.object({
	title: z.string().trim().min(1, 'Give the study a title.').max(120, 'A title has at most 120 characters.'),
	question: z.string().trim().max(600).default(''),
	activities: z.array(z.string().trim().min(1).max(60)).min(1, 'Name at least one activity.').max(20),
	reference: device,
	wearables: z.array(device).min(1, 'Name at least one wearable.').max(6, 'A study has at most six wearables.')
});


/** @throws ZodError or DomainError invalid when `input` (as it came from a form) is not a study */
export async function createStudy(db: Queryable, actor: Actor, input: unknown): Promise<{ id: string; slug: string }> {
	authorise(actor, 'study.edit');
	const study = newStudySchema.parse(input);
	const all = [{ ...study.reference, role: 'reference' as const }, ...study.wearables.map((w) => ({ ...w, role: 'wearable' as const }))];
	const names = all.map((d) => d.name.toLowerCase());
	if (new Set(names).size !== names.length) throw invalid('The same device stands twice in the list. Each model is named once.');
	return db.transaction(async (tx) => {
		const slug = await freeSlug(slugFrom(study.title), async (s) => (await tx.select({ id: studies.id }).from(studies).where(and(eq(studies.teamId, actor.teamId), eq(studies.slug, s)))).length > 0);
		const [made] = await tx
			.insert(studies)
			.values({ teamId: actor.teamId, slug, title: study.title, question: study.question, activities: study.activities, createdBy: actor.userId })
			.returning({ id: studies.id });
		const known = await tx.select().from(deviceModels).where(and(eq(deviceModels.teamId, actor.teamId), inArray(deviceModels.name, all.map((d) => d.name))));
		for (const [number, d] of all.entries()) {
			const before = known.find((k) => k.name === d.name);
			if (before && before.role !== d.role) throw invalid(`${d.name} is known to your team as a ${before.role}. Choose another name or another place for it.`);
			const [model] = before
				? [before]
				: await tx
						.insert(deviceModels)
						.values({ teamId: actor.teamId, name: d.name, shortName: d.shortName || d.name.split(/\s+/)[0].slice(0, 20), role: d.role, placement: d.placement })
						.returning();
			await tx.insert(studyDevices).values({ teamId: actor.teamId, studyId: made.id, deviceModelId: model.id, number });
		}
		await tx.insert(analysisPlans).values({ teamId: actor.teamId, studyId: made.id, version: 1, body: { ...DEFAULT_PLAN, version: 1 }, reason: 'First version', createdBy: actor.userId });
		await record(tx, actor, { action: 'study.created', subjectType: 'study', subjectId: made.id, detail: { title: study.title, devices: all.map((d) => d.name) } });
		return { id: made.id, slug };
	});
}
