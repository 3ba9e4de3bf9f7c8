/** What a person's first edit means for a session: it has an annotator, and annotating has begun. */
import { eq } from 'drizzle-orm';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { sessions } from '../db/schema';
import { record } from '../record/audit';
import type { SessionRecord } from './access';

/**
 * @param session held by the caller's transaction
 * @param began true when a tag was made or changed: an aligned session is being annotated from then on
 */
export async function noteEdit(tx: Queryable, actor: Actor, session: SessionRecord, began: boolean): Promise<void> {
	const annotatorId = session.annotatorId ?? actor.memberId;
	const state = began && session.state === 'aligned' ? 'annotating' : session.state;
	if (annotatorId === session.annotatorId && state === session.state) return;
	await tx.update(sessions).set({ annotatorId, state }).where(eq(sessions.id, session.id));
	if (state !== session.state) await record(tx, actor, { action: 'session.state-changed', subjectType: 'session', subjectId: session.id, detail: { from: session.state, to: state } });
}
