/** Handing a session to review, taking it back, and opening it again. Each writes the record in its own transaction. */
import { and, eq, isNull, sql } from 'drizzle-orm';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { reviews, sessions } from '../db/schema';
import { conflict, invalid } from '../errors';
import { record } from '../record/audit';
import { holdSession, type SessionRecord } from '../session/access';
import { alignmentOfSession, CAN_BE_HANDED_IN } from '../session/state';

/** The round that waits for a decision; null when none does. */
export async function openRound(tx: Queryable, session: SessionRecord): Promise<typeof reviews.$inferSelect | null> {
	const [round] = await tx
		.select()
		.from(reviews)
		.where(and(eq(reviews.teamId, session.teamId), eq(reviews.sessionId, session.id), isNull(reviews.decision), isNull(reviews.takenBackAt)));
	return round ?? null;
}

/** Hands a session in. It needs a reference, a wearable, and every wearable's offset decided or reliable. */
export async function submitSession(db: Queryable, actor: Actor, sessionId: string, note: string): Promise<void> {
	authorise(actor, 'session.submit');
	await db.transaction(async (tx) => {
		const session = await holdSession(tx, actor, sessionId);
		if (session.state === 'in review') throw conflict(`${session.code} is in review already.`);
		if (session.state === 'reviewed') throw conflict(`${session.code} is reviewed. Open it again, with a reason, before it is handed in once more.`);
		const { hasReference, wearables } = await alignmentOfSession(tx, session.teamId, session.id);
		if (!hasReference) throw invalid(`${session.code} has no reference: there is nothing to review. Bring in the strap’s file of the same time.`);
		if (wearables.length === 0) throw invalid(`${session.code} has no wearable: there is nothing to review. Bring in its file.`);
		const undecided = wearables.filter((w) => !w.stands);
		if (undecided.length > 0 || !CAN_BE_HANDED_IN.includes(session.state)) {
			const names = (undecided.length > 0 ? undecided : wearables).map((w) => w.name).join(', ');
			throw invalid(`The offset of ${names} is not decided yet. Check it, then lock it or put it at the peak.`);
		}
		const [{ last }] = await tx
			.select({ last: sql<number>`coalesce(max(${reviews.round}), 0)`.mapWith(Number) })
			.from(reviews)
			.where(eq(reviews.sessionId, session.id));
		await tx.insert(reviews).values({ teamId: actor.teamId, sessionId: session.id, round: last + 1, submittedBy: actor.memberId, submitNote: note.trim() });
		await tx
			.update(sessions)
			.set({ state: 'in review', annotatorId: session.annotatorId ?? actor.memberId })
			.where(eq(sessions.id, session.id));
		await record(tx, actor, { action: 'session.submitted', subjectType: 'session', subjectId: session.id, detail: { session: session.code, round: last + 1, note: note.trim() } });
	});
}

/** Takes a session back from review before anybody has decided. */
export async function takeBack(db: Queryable, actor: Actor, sessionId: string): Promise<void> {
	authorise(actor, 'session.submit');
	await db.transaction(async (tx) => {
		const session = await holdSession(tx, actor, sessionId);
		const round = await openRound(tx, session);
		if (session.state !== 'in review' || !round) throw conflict(`${session.code} is not in review: there is nothing to take back.`);
		await tx.update(reviews).set({ takenBackAt: new Date() }).where(eq(reviews.id, round.id));
		await tx.update(sessions).set({ state: 'annotating' }).where(eq(sessions.id, session.id));
		await record(tx, actor, { action: 'session.taken-back', subjectType: 'session', subjectId: session.id, detail: { session: session.code, round: round.round } });
	});
}

/** Opens a reviewed session again. What was decided stays in the record, and so does the reason. */
export async function reopenSession(db: Queryable, actor: Actor, sessionId: string, reason: string): Promise<void> {
	authorise(actor, 'session.submit');
	if (reason.trim() === '') throw invalid('Say why the session is opened again: the record keeps the reason.');
	await db.transaction(async (tx) => {
		const session = await holdSession(tx, actor, sessionId);
		if (session.state !== 'reviewed') throw conflict(`${session.code} is not reviewed: there is nothing to open again.`);
		await tx.update(sessions).set({ state: 'annotating' }).where(eq(sessions.id, session.id));
		await record(tx, actor, { action: 'session.reopened', subjectType: 'session', subjectId: session.id, detail: { session: session.code, reason: reason.trim() } });
	});
}
