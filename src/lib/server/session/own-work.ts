/** Whose work a session is: nobody decides on the own one. */
import { and, desc, eq, gt, isNotNull, isNull } from 'drizzle-orm';
import type { Queryable } from '../db/client';
import { alignments, annotations, annotationVersions, recordings, reviews } from '../db/schema';
import type { SessionRecord } from './access';

/**
 * Members whose work a session is in its present round: its annotator, who handed it in, and everybody who wrote a tag
 * or an offset since the last decision.
 */
export async function workersOn(db: Queryable, session: Pick<SessionRecord, 'id' | 'teamId' | 'annotatorId'>): Promise<Set<string>> {
	const [last] = await db
		.select({ at: reviews.decidedAt })
		.from(reviews)
		.where(and(eq(reviews.teamId, session.teamId), eq(reviews.sessionId, session.id), isNotNull(reviews.decidedAt)))
		.orderBy(desc(reviews.decidedAt))
		.limit(1);
	const since = last?.at ?? null;
	const tagAuthors = await db
		.selectDistinct({ id: annotationVersions.authorId })
		.from(annotationVersions)
		.innerJoin(annotations, eq(annotations.id, annotationVersions.annotationId))
		.where(and(eq(annotations.teamId, session.teamId), eq(annotations.sessionId, session.id), since ? gt(annotationVersions.createdAt, since) : undefined));
	const offsetAuthors = await db
		.selectDistinct({ id: alignments.authorId })
		.from(alignments)
		.innerJoin(recordings, eq(recordings.id, alignments.recordingId))
		.where(and(eq(recordings.teamId, session.teamId), eq(recordings.sessionId, session.id), since ? gt(alignments.createdAt, since) : undefined));
	const submitters = await db
		.select({ id: reviews.submittedBy })
		.from(reviews)
		.where(and(eq(reviews.teamId, session.teamId), eq(reviews.sessionId, session.id), isNull(reviews.decision), isNull(reviews.takenBackAt)));
	return new Set([{ id: session.annotatorId }, ...tagAuthors, ...offsetAuthors, ...submitters].flatMap(({ id }) => id ?? []));
}
