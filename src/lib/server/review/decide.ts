/** A reviewer's decision: vouched for, or handed back with what to do. */
import { eq } from 'drizzle-orm';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { reviews, sessions } from '../db/schema';
import { conflict, invalid, notAllowed } from '../errors';
import { record } from '../record/audit';
import { holdSession } from '../session/access';
import { workersOn } from '../session/own-work';
import { openRound } from './hand-in';

/**
 * Decides the open round. Never on own work: neither who handed it in, nor its annotator, nor anybody who wrote a tag
 * or an offset of it since the last decision. The database refuses the same.
 */
export async function decideReview(db: Queryable, actor: Actor, sessionId: string, decision: 'approved' | 'returned', comment: string): Promise<void> {
	authorise(actor, 'session.review');
	await db.transaction(async (tx) => {
		const session = await holdSession(tx, actor, sessionId);
		const round = await openRound(tx, session);
		if (session.state !== 'in review' || !round) throw conflict(`${session.code} is not in review any more: there is nothing to decide. Load it again to see what happened.`);
		if ((await workersOn(tx, session)).has(actor.memberId))
			throw notAllowed(`${session.code} is your own work: you handed it in, annotate it, or wrote a tag or an offset of it in this round. Ask a colleague to decide.`);
		const written = comment.trim();
		if (decision === 'returned' && written === '') throw invalid('Say what is to be done: a session is not handed back without a comment.');
		await tx.update(reviews).set({ reviewerId: actor.memberId, decision, comment: written, decidedAt: new Date() }).where(eq(reviews.id, round.id));
		await tx
			.update(sessions)
			.set({ state: decision === 'approved' ? 'reviewed' : 'returned' })
			.where(eq(sessions.id, session.id));
		await record(tx, actor, { action: `session.${decision}`, subjectType: 'session', subjectId: session.id, detail: { session: session.code, round: round.round, comment: written } });
	});
}
