/** When a session counts as aligned: the one rule, called by everything that changes recordings or offsets. */
import { and, desc, eq } from 'drizzle-orm';
import type { Queryable } from '../db/client';
import { alignments, deviceModels, recordings, sessions } from '../db/schema';
import type { SessionState } from '../../timeline/model';

/** An offset that stands: a reliable proposal, or what a person decided. */
export function offsetStands(alignment: { method: string; estimate: { reliable: boolean } | null }): boolean {
	return alignment.method !== 'proposed' || alignment.estimate?.reliable === true;
}

/**
 * Sets a session to `aligned` when it has a reference and every wearable's newest offset stands, else back to
 * `imported`. Sessions that somebody has begun to annotate keep their state.
 */
export async function settleSessionState(db: Queryable, teamId: string, sessionId: string): Promise<SessionState | null> {
	const [session] = await db
		.select({ state: sessions.state })
		.from(sessions)
		.where(and(eq(sessions.teamId, teamId), eq(sessions.id, sessionId)))
		.for('update');
	if (!session) return null;
	if (session.state !== 'imported' && session.state !== 'aligned') return session.state;

	const devices = await db
		.select({ recordingId: recordings.id, role: deviceModels.role })
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
	const wearables = devices.filter((d) => d.role === 'wearable');
	const aligned = devices.some((d) => d.role === 'reference') && wearables.length > 0 && wearables.every((d) => standing.has(d.recordingId));
	const state = aligned ? 'aligned' : 'imported';
	if (state !== session.state) await db.update(sessions).set({ state }).where(eq(sessions.id, sessionId));
	return state;
}
