/** The background job that searches a wearable's offset and writes it down as a proposal. */
import { and, desc, eq } from 'drizzle-orm';
import type { Queryable } from '../db/client';
import { alignments, deviceModels, recordings, sessions } from '../db/schema';
import type { Engine } from '../jobs/engine';
import { settleSessionState } from '../session/state';
import { heartRateOf } from './heart-rate';

/**
 * Searches and writes the next version of the wearable's alignment: the best-fit shift when it is reliable, else 0
 * with the reason. An offset that a person has set, or locked, is left alone.
 */
export async function proposeShift(db: Queryable, engine: Engine, recordingId: string): Promise<void> {
	const pair = await pairOf(db, recordingId);
	if (pair === null || (await isDecided(db, recordingId))) return;
	const [reference, wearable] = await Promise.all([heartRateOf(db, pair.referenceId), heartRateOf(db, recordingId)]);
	if (reference === null || wearable === null) return;
	const estimate = await engine.estimateShift(reference, wearable);

	await db.transaction(async (tx) => {
		// Held, session first, so that the recording does not move between the search and its result.
		await tx.select({ id: sessions.id }).from(sessions).where(eq(sessions.id, pair.sessionId)).for('update');
		await tx.select({ id: recordings.id }).from(recordings).where(eq(recordings.id, recordingId)).for('update');
		const now = await pairOf(tx, recordingId);
		if (now?.referenceId !== pair.referenceId || (await isDecided(tx, recordingId))) return;
		const version = 1 + ((await newestAlignment(tx, recordingId))?.version ?? 0);
		const offsetS = estimate.reliable && estimate.bestFitShiftS !== null ? estimate.bestFitShiftS : 0;
		await tx.insert(alignments).values({ teamId: now.teamId, recordingId, version, offsetS, method: 'proposed', estimate });
		await settleSessionState(tx, now.teamId, now.sessionId);
	});
}

/** The reference beside which a wearable stands; null when it has none, or is one. */
async function pairOf(db: Queryable, recordingId: string): Promise<{ teamId: string; sessionId: string; referenceId: string } | null> {
	const [own] = await db
		.select({ teamId: recordings.teamId, sessionId: recordings.sessionId, role: deviceModels.role })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(eq(recordings.id, recordingId));
	if (!own?.sessionId || own.role !== 'wearable') return null;
	const [reference] = await db
		.select({ id: recordings.id })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(recordings.sessionId, own.sessionId), eq(deviceModels.role, 'reference')));
	return reference ? { teamId: own.teamId, sessionId: own.sessionId, referenceId: reference.id } : null;
}

async function newestAlignment(db: Queryable, recordingId: string) {
	const [newest] = await db.select().from(alignments).where(eq(alignments.recordingId, recordingId)).orderBy(desc(alignments.version)).limit(1);
	return newest ?? null;
}

async function isDecided(db: Queryable, recordingId: string): Promise<boolean> {
	const newest = await newestAlignment(db, recordingId);
	return newest !== null && (newest.authorId !== null || newest.locked);
}
