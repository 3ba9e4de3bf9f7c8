/** Sessions of a study in review or handed back, the oldest first. */
import { and, asc, desc, eq, inArray, isNull, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { QueueEntry } from '../../review/queue';
import { may } from '../../roles';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { annotations, annotationVersions, members, participants, reviews, sessions } from '../db/schema';
import { workersOn } from '../session/own-work';

export async function reviewQueue(db: Queryable, actor: Actor, studyId: string): Promise<QueueEntry[]> {
	authorise(actor, 'session.read');
	const submitter = alias(members, 'submitter');
	const decider = alias(members, 'decider');
	const rows = await db
		.selectDistinctOn([reviews.sessionId], { session: sessions, review: reviews, participantCode: participants.code, handedInBy: submitter.initials, decidedBy: decider.initials })
		.from(reviews)
		.innerJoin(sessions, eq(sessions.id, reviews.sessionId))
		.innerJoin(submitter, eq(submitter.id, reviews.submittedBy))
		.leftJoin(decider, eq(decider.id, reviews.reviewerId))
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(
			and(
				eq(reviews.teamId, actor.teamId),
				eq(sessions.studyId, studyId),
				inArray(sessions.state, ['in review', 'returned']),
				isNull(reviews.takenBackAt),
				seesOwnSessionsOnly(actor) ? eq(participants.memberId, actor.memberId) : undefined
			)
		)
		.orderBy(reviews.sessionId, desc(reviews.round));
	const counts = await tagCounts(db, actor, rows.map((r) => r.session.id));
	const entries = await Promise.all(
		rows.map(async ({ session, review, participantCode, handedInBy, decidedBy }): Promise<QueueEntry> => {
			const own = (await workersOn(db, session)).has(actor.memberId) || review.submittedBy === actor.memberId;
			const decides = may(actor.role, 'session.review');
			const standing = session.state === 'returned' ? 'handed back' : decides && !own ? 'to decide' : 'with a colleague';
			return {
				code: session.code,
				title: session.title,
				activity: session.activity,
				participantCode,
				minutes: Math.round((session.endsAt.getTime() - session.startsAt.getTime()) / 60_000),
				round: review.round,
				handedInBy,
				handedInAt: review.submittedAt.toISOString(),
				submitNote: review.submitNote,
				acceptedTags: counts.get(session.id)?.accepted ?? 0,
				openProposals: counts.get(session.id)?.proposed ?? 0,
				standing,
				why: standing !== 'with a colleague' ? '' : decides ? 'Your own work: a colleague decides.' : 'A reviewer decides.',
				decidedBy,
				decidedAt: review.decidedAt?.toISOString() ?? null,
				comment: review.comment,
				mine: own
			};
		})
	);
	return entries.sort((a, b) => a.handedInAt.localeCompare(b.handedInAt) || a.code.localeCompare(b.code));
}

async function tagCounts(db: Queryable, actor: Actor, sessionIds: string[]): Promise<Map<string, { accepted: number; proposed: number }>> {
	if (sessionIds.length === 0) return new Map();
	const newest = db
		.selectDistinctOn([annotationVersions.annotationId], { sessionId: annotations.sessionId, status: annotationVersions.status })
		.from(annotationVersions)
		.innerJoin(annotations, eq(annotations.id, annotationVersions.annotationId))
		.where(and(eq(annotations.teamId, actor.teamId), inArray(annotations.sessionId, sessionIds)))
		.orderBy(asc(annotationVersions.annotationId), desc(annotationVersions.version))
		.as('newest');
	const rows = await db
		.select({
			sessionId: newest.sessionId,
			accepted: sql<number>`count(*) filter (where ${newest.status} = 'accepted')`.mapWith(Number),
			proposed: sql<number>`count(*) filter (where ${newest.status} = 'proposed')`.mapWith(Number)
		})
		.from(newest)
		.groupBy(newest.sessionId);
	return new Map(rows.map((r) => [r.sessionId, r]));
}
