/** The way to a session: by its id or its place in a study, within the actor's team and sight. */
import { and, eq } from 'drizzle-orm';
import { seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { participants, recordings, sessions, studies } from '../db/schema';
import { notAllowed, notFound } from '../errors';
import { isClosed } from './state';

export type SessionRecord = typeof sessions.$inferSelect;

/** What the actor may see: the own team's, and for a contributor only what he or she wore. */
function sight(actor: Actor) {
	return and(eq(sessions.teamId, actor.teamId), seesOwnSessionsOnly(actor) ? eq(participants.memberId, actor.memberId) : undefined);
}

export async function sessionById(db: Queryable, actor: Actor, sessionId: string): Promise<SessionRecord> {
	const [found] = await db
		.select({ session: sessions })
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(and(eq(sessions.id, sessionId), sight(actor)));
	if (!found) throw notFound('This session');
	return found.session;
}

export async function sessionByCode(db: Queryable, actor: Actor, studySlug: string, code: string): Promise<SessionRecord> {
	const [found] = await db
		.select({ session: sessions })
		.from(sessions)
		.innerJoin(studies, eq(studies.id, sessions.studyId))
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(and(eq(studies.slug, studySlug), eq(sessions.code, code), sight(actor)));
	if (!found) throw notFound('This session');
	return found.session;
}

/** The session of a recording, when it is the one asked for. */
export async function sessionOfRecording(db: Queryable, actor: Actor, sessionId: string, recordingId: string): Promise<SessionRecord> {
	const session = await sessionById(db, actor, sessionId);
	const [recording] = await db
		.select({ id: recordings.id })
		.from(recordings)
		.where(and(eq(recordings.teamId, actor.teamId), eq(recordings.id, recordingId), eq(recordings.sessionId, sessionId)));
	if (!recording) throw notFound('This recording');
	return session;
}

/** The session, held until the transaction ends, so that nobody changes its state in between. */
export async function holdSession(tx: Queryable, actor: Actor, sessionId: string): Promise<SessionRecord> {
	await sessionById(tx, actor, sessionId);
	const [session] = await tx.select().from(sessions).where(eq(sessions.id, sessionId)).for('update');
	if (!session) throw notFound('This session');
	return session;
}

/** Refuses changes to a session that is in review or reviewed. */
export function requireOpen(session: Pick<SessionRecord, 'state' | 'code'>): void {
	if (!isClosed(session.state)) return;
	throw notAllowed(
		session.state === 'in review'
			? `${session.code} is in review. Nothing moves until it is decided; an owner or analyst can take it back.`
			: `${session.code} is reviewed. An owner or analyst can open it again, with a reason.`
	);
}
