/** Versions of a study's analysis plan. */
import { and, desc, eq } from 'drizzle-orm';
import { validatePlan, type AnalysisPlan } from '../../agreement/plan';
import type { TagKind } from '../../agreement/tag';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { analysisPlans, users } from '../db/schema';
import { conflict, invalid } from '../errors';
import { record } from '../record/audit';

export interface PlanVersion {
	version: number;
	reason: string;
	by: string | null;
	at: Date;
}

export async function planVersions(db: Queryable, actor: Actor, studyId: string): Promise<PlanVersion[]> {
	authorise(actor, 'study.read');
	return db
		.select({ version: analysisPlans.version, reason: analysisPlans.reason, by: users.name, at: analysisPlans.createdAt })
		.from(analysisPlans)
		.leftJoin(users, eq(users.id, analysisPlans.createdBy))
		.where(and(eq(analysisPlans.teamId, actor.teamId), eq(analysisPlans.studyId, studyId)))
		.orderBy(desc(analysisPlans.version));
}

/**
 * Adds a version on top of `baseVersion`.
 * @throws DomainError invalid with every problem of the plan; conflict when somebody has added one meanwhile
 */
export async function amendPlan(db: Queryable, actor: Actor, studyId: string, baseVersion: number, body: unknown, reason: string, kinds: readonly TagKind[]): Promise<number> {
	authorise(actor, 'plan.edit');
	if (reason.trim() === '') throw invalid('Say why the plan changes: the reason stands in the record and in reports.');
	const version = baseVersion + 1;
	const checked = validatePlan({ ...(body as Partial<AnalysisPlan>), version }, kinds);
	if (!checked.ok) throw invalid(checked.problems.map((p) => p.message).join(' '), { problems: checked.problems });
	return db.transaction(async (tx) => {
		const [newest] = await tx
			.select({ version: analysisPlans.version, body: analysisPlans.body })
			.from(analysisPlans)
			.where(and(eq(analysisPlans.teamId, actor.teamId), eq(analysisPlans.studyId, studyId)))
			.orderBy(desc(analysisPlans.version))
			.limit(1)
			.for('update');
		if (!newest || newest.version !== baseVersion) throw conflict('Somebody changed the plan while you did. Look at the newest version, then change it again.', { newest: newest?.version ?? 0 });
		await tx.insert(analysisPlans).values({ teamId: actor.teamId, studyId, version, body: checked.plan, reason: reason.trim(), createdBy: actor.userId });
		await record(tx, actor, { action: 'plan.amended', subjectType: 'study', subjectId: studyId, detail: { from: newest.body, to: checked.plan, version, reason: reason.trim() } });
		return version;
	});
}
