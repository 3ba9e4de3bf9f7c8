/** Adds to the record: who did what, when, from what to what. */
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { auditEntries } from '../db/schema';

export interface RecordedAct {
	action: string;
	subjectType: string;
	subjectId: string;
	detail?: Record<string, unknown>;
}

/** Writes one entry in the caller's transaction, so that an act and its entry stand or fall together. */
export async function record(db: Queryable, actor: Pick<Actor, 'teamId' | 'userId' | 'initials'>, act: RecordedAct): Promise<void> {
	await db.insert(auditEntries).values({
		teamId: actor.teamId,
		actorId: actor.userId,
		actorInitials: actor.initials,
		action: act.action,
		subjectType: act.subjectType,
		subjectId: act.subjectId,
		detail: act.detail ?? {}
	});
}
