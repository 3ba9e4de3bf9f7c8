/** What a person's edit means for a session: it has an annotator, and how far it has come. */
import { eq } from 'drizzle-orm';
import type { SessionState } from '../../timeline/model';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { sessions } from '../db/schema';
import { record } from '../record/audit';
import type { SessionRecord } from './access';
import { settleSessionState } from './state';

/** What the sender of an edit learns: the version that it has, and how far the session has come. */
export interface SavedEdit {
	version: number;
	state: SessionState;
}

/**
 * Notes an edit that has just been written.
 *
 * @param session held by the caller's transaction
 * @param began true when a tag was made or changed: an aligned session is being annotated from then on
 * @returns the state of the session after it
 */
export async function noteEdit(tx: Queryable, actor: Actor, session: SessionRecord, began: boolean): Promise<SessionState> {
	const state = began && session.state === 'aligned' ? 'annotating' : session.state;
	const annotatorId = session.annotatorId ?? actor.memberId;
	if (annotatorId !== session.annotatorId || state !== session.state) await tx.update(sessions).set({ annotatorId, state }).where(eq(sessions.id, session.id));
	const settled = (await settleSessionState(tx, actor.teamId, session.id)) ?? state;
	if (settled !== session.state) await record(tx, actor, { action: 'session.state-changed', subjectType: 'session', subjectId: session.id, detail: { session: session.code, from: session.state, to: settled } });
	return settled;
}
