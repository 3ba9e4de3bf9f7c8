/**
 * The background job for a wearable that overlaps no reference: is it of a session whole or half hours away, its clock
 * set to another zone? Only a heart rate that fits reliably makes it a question; a person answers it.
 */
import { and, eq, isNull } from 'drizzle-orm';
import { zoneShiftOf } from '../../import/zone';
import { clockTime, duration } from '../../text/figures';
import type { Queryable } from '../db/client';
import { deviceModels, recordings, sessions, uploads } from '../db/schema';
import type { Engine } from '../jobs/engine';
import { sessionsAround, type SessionAround } from './filing';
import { heartRateOf } from './heart-rate';
import { zoneMistakePossible } from './placement';
import { uploaderOf } from './uploader';

/** Code of an upload whose session shall stay its own, whatever fits elsewhere. */
export const KEPT_APART = 'kept-apart';

export async function askClock(db: Queryable, engine: Engine, recordingId: string): Promise<void> {
	const lone = await loneWearable(db, recordingId);
	if (lone === null) return;
	const wearable = await heartRateOf(db, recordingId);
	if (wearable === null) return;

	for (const session of await candidates(db, lone)) {
		const reference = await referenceOf(db, session.sessionId);
		const trace = reference ? await heartRateOf(db, reference.recordingId) : null;
		if (reference === null || trace === null) continue;
		const estimate = await engine.estimateShift(trace, wearable);
		const zoneShiftS = estimate.reliable && estimate.bestFitShiftS !== null ? zoneShiftOf(estimate.bestFitShiftS) : null;
		if (zoneShiftS === null) continue;
		await ask(db, lone, session, { zoneShiftS, startsAfterReferenceS: lone.startS + zoneShiftS - reference.startS });
		return;
	}
}

interface LoneWearable {
	uploadId: string;
	teamId: string;
	studyId: string;
	sessionId: string;
	deviceModelId: string;
	participantId: string | null;
	contributorsOwn: boolean;
	startS: number;
	endS: number;
}

/** The filed wearable whose session has no reference; null when that is no longer so, or the question was answered with no. */
async function loneWearable(db: Queryable, recordingId: string): Promise<LoneWearable | null> {
	const [own] = await db
		.select({
			uploadId: uploads.id, messageCode: uploads.messageCode, uploadedBy: uploads.uploadedBy, teamId: recordings.teamId, studyId: recordings.studyId, sessionId: sessions.id,
			deviceModelId: deviceModels.id, role: deviceModels.role, participantId: sessions.participantId, startS: recordings.startS, endS: recordings.endS
		})
		.from(recordings)
		.innerJoin(sessions, eq(sessions.id, recordings.sessionId))
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.innerJoin(uploads, and(eq(uploads.recordingId, recordings.id), eq(uploads.state, 'filed')))
		.where(eq(recordings.id, recordingId));
	if (!own || own.role !== 'wearable' || own.messageCode === KEPT_APART || (await referenceOf(db, own.sessionId)) !== null) return null;
	const uploader = await uploaderOf(db, own.teamId, own.uploadedBy);
	return { ...own, contributorsOwn: uploader.role === 'contributor' };
}

async function candidates(db: Queryable, lone: LoneWearable): Promise<SessionAround[]> {
	const around = await sessionsAround(db, lone);
	const sameWearer = (s: SessionAround) => (lone.contributorsOwn ? s.participantId === lone.participantId : s.participantId === null || lone.participantId === null || s.participantId === lone.participantId);
	return around.filter((s) => s.hasReference && sameWearer(s) && !s.deviceModelIds.includes(lone.deviceModelId) && zoneMistakePossible(lone, s.span));
}

async function referenceOf(db: Queryable, sessionId: string): Promise<{ recordingId: string; startS: number; name: string } | null> {
	const [reference] = await db
		.select({ recordingId: recordings.id, startS: recordings.startS, name: deviceModels.name })
		.from(recordings)
		.innerJoin(deviceModels, and(eq(deviceModels.id, recordings.deviceModelId), eq(deviceModels.role, 'reference')))
		.where(eq(recordings.sessionId, sessionId));
	return reference ?? null;
}

async function ask(db: Queryable, lone: LoneWearable, session: SessionAround, found: { zoneShiftS: number; startsAfterReferenceS: number }): Promise<void> {
	await db
		.update(uploads)
		.set({
			state: 'asking',
			messageCode: 'clock',
			message: clockSentence(lone, session, found),
			question: { code: 'clock', sessionId: session.sessionId, ...found },
			finishedAt: null
		})
		.where(and(eq(uploads.id, lone.uploadId), eq(uploads.state, 'filed'), isNull(uploads.question)));
}

function clockSentence(lone: LoneWearable, session: SessionAround, found: { zoneShiftS: number; startsAfterReferenceS: number }): string {
	const later = found.zoneShiftS > 0 ? 'later' : 'earlier';
	const beside = `${duration(Math.abs(found.startsAfterReferenceS))} ${found.startsAfterReferenceS < 0 ? 'before' : 'after'} the reference of ${session.code}`;
	return `As it stands it starts at ${clockTime(lone.startS).slice(0, 5)} UTC and overlaps no reference. Read ${hours(Math.abs(found.zoneShiftS))} ${later} it starts ${beside}, and its heart rate fits there.`;
}

/** `2 h`, `5.5 h`. */
function hours(seconds: number): string {
	return `${seconds / 3600} h`;
}
