/** States of a session: when it counts as aligned, and what may be changed in which state. */
import { and, desc, eq, isNotNull } from 'drizzle-orm';
import type { Queryable } from '../db/client';
import { alignments, annotations, annotationVersions, deviceModels, recordings, sessions } from '../db/schema';
import type { SessionState } from '../../timeline/model';

/*
 * imported ──► aligned ──► annotating ──► in review ──► reviewed
 *   every wearable's  first tag    handed in │            │ opened again, with a reason
 *   offset stands     of a person            ├──► returned ──► in review
 *                                            └──► annotating (taken back)
 * In review and reviewed are closed: no tag and no offset changes.
 */
const CLOSED_STATES: readonly SessionState[] = ['in review', 'reviewed'];
export const isClosed = (state: SessionState): boolean => CLOSED_STATES.includes(state);

/** States from which a session can be handed to review. */
export const CAN_BE_HANDED_IN: readonly SessionState[] = ['aligned', 'annotating', 'returned'];

/** An offset that stands: a reliable proposal, or what a person decided. */
export function offsetStands(alignment: { method: string; estimate: { reliable: boolean } | null }): boolean {
	return alignment.method !== 'proposed' || alignment.estimate?.reliable === true;
}

export interface AlignmentOfSession {
	hasReference: boolean;
	wearables: { recordingId: string; name: string; stands: boolean }[];
}

/** Which wearables' offsets stand, and whether there is a reference at all. */
export async function alignmentOfSession(db: Queryable, teamId: string, sessionId: string): Promise<AlignmentOfSession> {
	const devices = await db
		.select({ recordingId: recordings.id, role: deviceModels.role, name: deviceModels.name })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(recordings.teamId, teamId), eq(recordings.sessionId, sessionId)));
	const newest = await db
		.selectDistinctOn([alignments.recordingId], { recordingId: alignments.recordingId, method: alignments.method, estimate: alignments.estimate })
		.from(alignments)
		.innerJoin(recordings, eq(recordings.id, alignments.recordingId))
		.where(and(eq(recordings.teamId, teamId), eq(recordings.sessionId, sessionId)))
		.orderBy(alignments.recordingId, desc(alignments.version));
	const standing = new Set(newest.filter(offsetStands).map((a) => a.recordingId));
	return {
		hasReference: devices.some((d) => d.role === 'reference'),
		wearables: devices.filter((d) => d.role === 'wearable').map(({ recordingId, name }) => ({ recordingId, name, stands: standing.has(recordingId) }))
	};
}

/**
 * Sets a session to `aligned` when it has a reference and every wearable's newest offset stands (to `annotating` when
 * a person has tagged in it already), else back to `imported`. Sessions that somebody has begun to annotate keep their
 * state. Called by everything that changes recordings or offsets.
 */
export async function settleSessionState(db: Queryable, teamId: string, sessionId: string): Promise<SessionState | null> {
	const [session] = await db
		.select({ state: sessions.state })
		.from(sessions)
		.where(and(eq(sessions.teamId, teamId), eq(sessions.id, sessionId)))
		.for('update');
	if (!session) return null;
	if (session.state !== 'imported' && session.state !== 'aligned') return session.state;

	const { hasReference, wearables } = await alignmentOfSession(db, teamId, sessionId);
	const aligned = hasReference && wearables.length > 0 && wearables.every((w) => w.stands);
	const state = !aligned ? 'imported' : (await hasTagOfPerson(db, teamId, sessionId)) ? 'annotating' : 'aligned';
	if (state !== session.state) await db.update(sessions).set({ state }).where(eq(sessions.id, sessionId));
	return state;
}

async function hasTagOfPerson(db: Queryable, teamId: string, sessionId: string): Promise<boolean> {
	const [found] = await db
		.select({ id: annotations.id })
		.from(annotations)
		.innerJoin(annotationVersions, eq(annotationVersions.annotationId, annotations.id))
		.where(and(eq(annotations.teamId, teamId), eq(annotations.sessionId, sessionId), isNotNull(annotationVersions.authorId)))
		.limit(1);
	return found !== undefined;
}
