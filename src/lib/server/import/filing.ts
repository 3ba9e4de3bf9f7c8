/** Puts a recording whose device is known among the sessions of its study. */
import { and, eq, gt, inArray, lt, sql } from 'drizzle-orm';
import type { ImportQuestion } from '../../import/question';
import { FARTHEST_ZONE_SHIFT_S } from '../../import/zone';
import type { SessionState } from '../../timeline/model';
import { clockTime } from '../../text/figures';
import type { Queryable } from '../db/client';
import { deviceModels, participants, recordings, sessions, studies, uploads } from '../db/schema';
import { QUEUES, type JobSink } from '../jobs/queue';
import { isClosed, settleSessionState } from '../session/state';
import { unitOf } from './device';
import { guessActivity, guessParticipant } from './origin';
import { placeRecording, sessionSpan, zoneMistakePossible, type Placement, type SessionSlot, type Span } from './placement';
import type { Uploader } from './uploader';

export type FiledRecording = typeof recordings.$inferSelect;

export interface FilingOutcome {
	state: 'filed' | 'asking';
	sessionId: string | null;
	messageCode: string;
	message: string;
	question: ImportQuestion | null;
}

/** Sessions of a study are sorted by one hand at a time: two files of one new session must not open two. */
export async function lockSorting(tx: Queryable, studyId: string): Promise<void> {
	await tx.execute(sql`select pg_advisory_xact_lock(hashtextextended(${'sorting ' + studyId}, 0))`);
}

/**
 * Sets the recording's device and unit, then its session: one that it overlaps, a new one, or none yet and a question.
 * The caller holds the transaction; the sorting of the study is locked here.
 */
export async function fileRecording(tx: Queryable, sink: JobSink, uploader: Uploader, recording: FiledRecording, deviceModelId: string): Promise<FilingOutcome> {
	await lockSorting(tx, recording.studyId);
	const deviceUnitId = await unitOf(tx, recording.teamId, deviceModelId, recording.device);
	await tx.update(recordings).set({ deviceModelId, deviceUnitId, sessionId: null }).where(eq(recordings.id, recording.id));

	const participantId = await wearerOf(tx, uploader, recording);
	const slots = await slotsNear(tx, recording.studyId, recording);
	const placement = placeRecording(
		{ span: recording, deviceModelId, participantId, ownSessionsOnly: uploader.role === 'contributor' },
		slots
	);
	if (placement.kind === 'ask') {
		const { code } = placement.question;
		return { state: 'asking', sessionId: null, messageCode: code, message: await questionSentence(tx, recording, deviceModelId, placement), question: placement.question };
	}
	const sessionId = placement.kind === 'join' ? placement.slot.sessionId : await openSession(tx, recording, recording);
	await putIntoSession(tx, sink, { ...recording, deviceModelId, deviceUnitId }, sessionId, participantId);
	const code = await codeOf(tx, sessionId);
	return placement.kind === 'join'
		? { state: 'filed', sessionId, messageCode: 'joined', message: `Put into ${code}: ${Math.floor(placement.share * 100)} % of the shorter of the two overlaps.`, question: null }
		: { state: 'filed', sessionId, messageCode: 'own-session', message: `${code} was opened for it; nothing else overlapped it by half of the shorter one.`, question: null };
}

/** Makes a session for a recording and gives its id. The study's sorting is locked by the caller. */
export async function openSession(tx: Queryable, recording: Pick<FiledRecording, 'teamId' | 'studyId'>, span: Span): Promise<string> {
	const [{ last }] = await tx
		.select({ last: sql<number>`coalesce(max(substring(${sessions.code} from 2)::int), 0)` })
		.from(sessions)
		.where(eq(sessions.studyId, recording.studyId));
	const [session] = await tx
		.insert(sessions)
		.values({
			teamId: recording.teamId,
			studyId: recording.studyId,
			code: `S${String(Number(last) + 1).padStart(2, '0')}`,
			startsAt: new Date(span.startS * 1000),
			endsAt: new Date(span.endS * 1000)
		})
		.returning({ id: sessions.id });
	return session.id;
}

/**
 * Puts a recording into a session, fills in wearer and activity where nobody has said them, and asks the background
 * worker for offsets. The study's sorting is locked by the caller.
 */
export async function putIntoSession(tx: Queryable, sink: JobSink, recording: FiledRecording, sessionId: string, participantId: string | null): Promise<void> {
	await tx.update(recordings).set({ sessionId }).where(eq(recordings.id, recording.id));
	const [session] = await tx
		.select({ activity: sessions.activity, participantId: sessions.participantId, activities: studies.activities })
		.from(sessions)
		.innerJoin(studies, eq(studies.id, sessions.studyId))
		.where(eq(sessions.id, sessionId));
	const activity = session.activity ?? guessActivity(recording.activity, recording.fileName, session.activities);
	await tx
		.update(sessions)
		.set({ activity, participantId: session.participantId ?? participantId })
		.where(eq(sessions.id, sessionId));
	await refreshSession(tx, recording.teamId, sessionId);
	await askForOffsets(tx, sink, recording, sessionId);
}

/** After recordings came or went: the session's span and state, or its end when it is empty. */
export async function refreshSession(tx: Queryable, teamId: string, sessionId: string): Promise<void> {
	const held = await tx
		.select({ startS: recordings.startS, endS: recordings.endS, role: deviceModels.role })
		.from(recordings)
		.leftJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(recordings.teamId, teamId), eq(recordings.sessionId, sessionId)));
	const span = sessionSpan(held.map((r) => ({ ...r, isReference: r.role === 'reference' })));
	if (span === null) {
		await tx.delete(sessions).where(and(eq(sessions.teamId, teamId), eq(sessions.id, sessionId)));
		return;
	}
	await tx
		.update(sessions)
		.set({ startsAt: new Date(span.startS * 1000), endsAt: new Date(span.endS * 1000) })
		.where(eq(sessions.id, sessionId));
	await settleSessionState(tx, teamId, sessionId);
}

/** Jobs that a recording's arrival makes necessary: offsets of the wearables, or a look for a clock in another zone. */
async function askForOffsets(tx: Queryable, sink: JobSink, recording: FiledRecording, sessionId: string): Promise<void> {
	const held = await tx
		.select({ recordingId: recordings.id, role: deviceModels.role })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(eq(recordings.sessionId, sessionId));
	const isReference = held.some((r) => r.recordingId === recording.id && r.role === 'reference');
	const wearables = held.filter((r) => r.role === 'wearable');
	if (isReference) {
		for (const { recordingId } of wearables) await sink.add(tx, QUEUES.proposeShift, { recordingId });
		for (const recordingId of await loneWearablesAround(tx, recording)) await sink.add(tx, QUEUES.askClock, { recordingId });
	} else if (held.some((r) => r.role === 'reference')) {
		await sink.add(tx, QUEUES.proposeShift, { recordingId: recording.id });
	} else {
		await sink.add(tx, QUEUES.askClock, { recordingId: recording.id });
	}
}

/** Wearables in sessions without a reference that a wrong zone may have kept from this reference. */
async function loneWearablesAround(tx: Queryable, reference: FiledRecording): Promise<string[]> {
	const around = await sessionsAround(tx, reference);
	const lone = around.filter((s) => !s.hasReference && zoneMistakePossible(s.span, reference)).map((s) => s.sessionId);
	if (lone.length === 0) return [];
	const rows = await tx.select({ id: recordings.id }).from(recordings).where(inArray(recordings.sessionId, lone));
	return rows.map((r) => r.id);
}

export interface SessionAround {
	sessionId: string;
	code: string;
	span: Span;
	hasReference: boolean;
	participantId: string | null;
	deviceModelIds: string[];
}

/** Sessions of the study within the widest zone mistake of a recording, open ones only. */
export async function sessionsAround(tx: Queryable, recording: Pick<FiledRecording, 'studyId' | 'startS' | 'endS'>): Promise<SessionAround[]> {
	const rows = await sessionsBetween(tx, recording.studyId, recording.startS - FARTHEST_ZONE_SHIFT_S, recording.endS + FARTHEST_ZONE_SHIFT_S);
	return rows.filter((r) => !isClosed(r.state));
}

async function slotsNear(tx: Queryable, studyId: string, span: Span): Promise<SessionSlot[]> {
	const rows = await sessionsBetween(tx, studyId, span.startS, span.endS);
	return rows.map(({ state, ...slot }) => ({ ...slot, closed: isClosed(state) }));
}

async function sessionsBetween(tx: Queryable, studyId: string, fromS: number, toS: number): Promise<(SessionAround & { state: SessionState })[]> {
	const rows = await tx
		.select({ sessionId: sessions.id, code: sessions.code, startsAt: sessions.startsAt, endsAt: sessions.endsAt, state: sessions.state, participantId: sessions.participantId, deviceModelId: recordings.deviceModelId, role: deviceModels.role })
		.from(sessions)
		.leftJoin(recordings, eq(recordings.sessionId, sessions.id))
		.leftJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(sessions.studyId, studyId), lt(sessions.startsAt, new Date(toS * 1000 + 1000)), gt(sessions.endsAt, new Date(fromS * 1000 - 1000))))
		.orderBy(sessions.code);
	const found = new Map<string, SessionAround & { state: SessionState }>();
	for (const row of rows) {
		const session = found.get(row.sessionId) ?? {
			sessionId: row.sessionId,
			code: row.code,
			span: { startS: row.startsAt.getTime() / 1000, endS: row.endsAt.getTime() / 1000 },
			hasReference: false,
			participantId: row.participantId,
			deviceModelIds: [],
			state: row.state
		};
		if (row.deviceModelId !== null) session.deviceModelIds.push(row.deviceModelId);
		if (row.role === 'reference') session.hasReference = true;
		found.set(row.sessionId, session);
	}
	return [...found.values()];
}

/** The wearer: a contributor's own code; else a known code in the file's name. */
async function wearerOf(tx: Queryable, uploader: Uploader, recording: FiledRecording): Promise<string | null> {
	if (uploader.role === 'contributor') return uploader.ownParticipantId;
	const known = await tx.select({ id: participants.id, code: participants.code }).from(participants).where(eq(participants.teamId, recording.teamId));
	return guessParticipant(recording.fileName, known)?.id ?? null;
}

export async function codeOf(tx: Queryable, sessionId: string): Promise<string> {
	const [session] = await tx.select({ code: sessions.code }).from(sessions).where(eq(sessions.id, sessionId));
	return session.code;
}

async function questionSentence(tx: Queryable, recording: FiledRecording, deviceModelId: string, placement: Extract<Placement, { kind: 'ask' }>): Promise<string> {
	const [device] = await tx.select({ name: deviceModels.name }).from(deviceModels).where(eq(deviceModels.id, deviceModelId));
	const [slot] = placement.slots;
	const times = `${clockTime(recording.startS).slice(0, 5)} to ${clockTime(recording.endS).slice(0, 5)} UTC`;
	switch (placement.question.code) {
		case 'device-twice': {
			const [other] = await tx
				.select({ fileName: recordings.fileName })
				.from(recordings)
				.where(and(eq(recordings.sessionId, slot.sessionId), eq(recordings.deviceModelId, deviceModelId)));
			return `By its times (${times}) it belongs to ${slot.code}, which already has ${other.fileName} from the ${device.name}. Is it another device, or did somebody else wear it?`;
		}
		case 'which-session':
			return `By its times (${times}) it fits ${placement.slots.map((s) => s.code).join(' and ')}. Which one is it of?`;
		default:
			return `By its times (${times}) it belongs to ${slot.code}, whose review has begun. A reviewer can hand ${slot.code} back so that it can be put there, or it becomes a session of its own.`;
	}
}

/** Writes an outcome into the upload's row. */
export async function noteOutcome(tx: Queryable, uploadId: string, recordingId: string, outcome: FilingOutcome): Promise<void> {
	await tx
		.update(uploads)
		.set({
			state: outcome.state,
			progress: outcome.state === 'filed' ? 1 : 0.75,
			recordingId,
			messageCode: outcome.messageCode,
			message: outcome.message,
			question: outcome.question,
			finishedAt: outcome.state === 'filed' ? new Date() : null
		})
		.where(eq(uploads.id, uploadId));
}
