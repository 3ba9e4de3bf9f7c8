/** Thin heart-rate lines of recordings, for the import page. */
import { and, eq, inArray, or } from 'drizzle-orm';
import { outlineOf, type Outline } from '../../import/outline';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { participants, recordings, sessions, traces } from '../db/schema';

/** Lines by recording; recordings that are gone, or not the actor's to see, are left out. */
export async function outlinesOf(db: Queryable, actor: Actor, studyId: string, recordingIds: readonly string[]): Promise<Record<string, Outline>> {
	authorise(actor, 'recording.upload');
	if (recordingIds.length === 0) return {};
	const rows = await db
		.select({ id: recordings.id, startS: recordings.startS, endS: recordings.endS, tS: traces.tS, value: traces.value })
		.from(recordings)
		.innerJoin(traces, and(eq(traces.recordingId, recordings.id), eq(traces.kind, 'heartRate')))
		.leftJoin(sessions, eq(sessions.id, recordings.sessionId))
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(
			and(
				eq(recordings.teamId, actor.teamId),
				eq(recordings.studyId, studyId),
				inArray(recordings.id, [...recordingIds]),
				seesOwnSessionsOnly(actor) ? or(eq(recordings.uploadedBy, actor.memberId), eq(participants.memberId, actor.memberId)) : undefined
			)
		);
	return Object.fromEntries(rows.map((row) => [row.id, outlineOf(row, row)]));
}
