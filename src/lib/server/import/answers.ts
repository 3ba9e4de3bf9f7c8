/** What a person decides on the import page: which device, which session, wearer and activity, out again. */
import { and, eq, sql } from 'drizzle-orm';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { annotations, deviceModels, participants, rawFiles, recordings, sessions, studies, uploads } from '../db/schema';
import { conflict, invalid, notFound } from '../errors';
import type { JobSink } from '../jobs/queue';
import { may } from '../../roles';
import { record } from '../record/audit';
import { isClosed } from '../session/state';
import { KEPT_APART } from './ask-clock';
import { devicesOfStudy, rememberedModel, rememberModel, unitOf } from './device';
import { codeOf, fileRecording, lockSorting, noteOutcome, openSession, putIntoSession, refreshSession, type FiledRecording } from './filing';
import { originKey } from './origin';
import { dropUnusedBytes } from './read-upload';
import { uploaderOf } from './uploader';

type Upload = typeof uploads.$inferSelect;

/**
 * Says which device made an upload's file. The answer is remembered, and every upload that waits for the same answer
 * takes it at once. On a recording that is filed already it corrects the device.
 *
 * @returns the number of uploads that the answer settled
 */
export async function answerDevice(db: Queryable, sink: JobSink, actor: Actor, uploadId: string, deviceModelId: string): Promise<number> {
	return db.transaction(async (tx) => {
		const { upload, recording } = await ownUpload(tx, actor, uploadId);
		await requireStudyDevice(tx, upload, deviceModelId);
		const isSorter = may(actor.role, 'session.sort');
		const { question } = upload;
		const key = question?.code === 'which-device' ? question.key : await keyOf(tx, recording);
		// A contributor's answer is not allowed to overrule what the team has said before.
		await rememberModel(tx, actor.teamId, key, deviceModelId, isSorter);
		const remembered = await rememberedModel(tx, actor.teamId, key);
		await record(tx, actor, { action: 'recording.device-answered', subjectType: 'recording', subjectId: recording.id, detail: { key, deviceModelId } });

		if (question?.code !== 'which-device') {
			await correctDevice(tx, sink, upload, recording, deviceModelId);
			return 1;
		}
		const waiting = await waitingForSameAnswer(tx, actor, key);
		for (const other of waiting) {
			const model = other.upload.id === uploadId ? deviceModelId : remembered;
			const known = await devicesOfStudy(tx, actor.teamId, other.upload.studyId);
			if (model === null || !known.some((d) => d.modelId === model)) continue;
			const uploader = await uploaderOf(tx, actor.teamId, other.upload.uploadedBy);
			await noteOutcome(tx, other.upload.id, other.recording.id, await fileRecording(tx, sink, uploader, other.recording, model));
		}
		return waiting.length;
	});
}

/** Moves an upload's recording to a session, or, with null, to a new one of its own. Tags and offsets go along. */
export async function placeInSession(db: Queryable, sink: JobSink, actor: Actor, uploadId: string, sessionId: string | null): Promise<void> {
	await db.transaction(async (tx) => {
		const { upload, recording } = await ownUpload(tx, actor, uploadId);
		const { deviceModelId } = recording;
		if (deviceModelId === null) throw invalid(`First say which device made ${upload.fileName}, then choose its session.`);
		await requireOpen(tx, recording.sessionId);
		const target = sessionId ?? (await openSession(tx, recording, recording));
		if (target === recording.sessionId) return settleAsFiled(tx, upload, 'kept', 'Left where it is.');
		const code = sessionId === null ? await codeOf(tx, target) : await requireRoomFor(tx, actor, upload, deviceModelId, target);

		const uploader = await uploaderOf(tx, actor.teamId, upload.uploadedBy);
		const deviceUnitId = await unitOf(tx, actor.teamId, deviceModelId, recording.device);
		await putIntoSession(tx, sink, { ...recording, deviceUnitId }, target, uploader.role === 'contributor' ? uploader.ownParticipantId : null);
		await tx.update(annotations).set({ sessionId: target }).where(eq(annotations.recordingId, recording.id));
		if (recording.sessionId !== null) await refreshSession(tx, actor.teamId, recording.sessionId);
		await settleAsFiled(tx, upload, 'placed', sessionId === null ? `${code} was opened for it by ${actor.initials}.` : `Put into ${code} by ${actor.initials}.`);
		await record(tx, actor, { action: 'recording.moved', subjectType: 'recording', subjectId: recording.id, detail: { from: recording.sessionId, to: target } });
	});
}

/** Answers 'is its clock set to another zone' with no: its session stays its own and the question does not come back. */
export async function keepApart(db: Queryable, actor: Actor, uploadId: string): Promise<void> {
	await db.transaction(async (tx) => {
		const { upload } = await ownUpload(tx, actor, uploadId);
		if (upload.question?.code !== 'clock') throw invalid('This question is answered already.');
		await settleAsFiled(tx, upload, KEPT_APART, `Kept as a session of its own by ${actor.initials}.`);
	});
}

/** Takes an upload out again: recording, traces, tags and bytes go, the record keeps that they were here. */
export async function takeOut(db: Queryable, actor: Actor, uploadId: string): Promise<void> {
	await db.transaction(async (tx) => {
		const { upload, recording } = await reachableUpload(tx, actor, uploadId);
		const [raw] = upload.rawFileId ? await tx.select({ sha256: rawFiles.sha256 }).from(rawFiles).where(eq(rawFiles.id, upload.rawFileId)) : [];
		if (recording) {
			await requireOpen(tx, recording.sessionId);
			await tx.delete(recordings).where(eq(recordings.id, recording.id));
			if (recording.sessionId !== null) await refreshSession(tx, actor.teamId, recording.sessionId);
		}
		await tx.delete(uploads).where(eq(uploads.id, upload.id));
		await dropUnusedBytes(tx, upload.rawFileId);
		await record(tx, actor, { action: 'recording.removed', subjectType: 'upload', subjectId: upload.id, detail: { fileName: upload.fileName, sha256: raw?.sha256 ?? null, sessionId: recording?.sessionId ?? null } });
	});
}

export interface SessionDescription {
	/** A participant of the team, or null for 'not said'. */
	participantId?: string | null;
	/** A code that is made when the team does not have it yet. */
	participantCode?: string;
	/** One of the study's activities, or null for 'not said'. */
	activity?: string | null;
}

/** Says who wore the devices and what was done. */
export async function describeSession(db: Queryable, actor: Actor, studyId: string, sessionId: string, said: SessionDescription): Promise<void> {
	authorise(actor, 'session.sort');
	await db.transaction(async (tx) => {
		const [session] = await tx
			.select({ state: sessions.state, activities: studies.activities })
			.from(sessions)
			.innerJoin(studies, eq(studies.id, sessions.studyId))
			.where(and(eq(sessions.teamId, actor.teamId), eq(sessions.studyId, studyId), eq(sessions.id, sessionId)))
			.for('update', { of: sessions });
		if (!session) throw notFound('The session');
		await requireOpen(tx, sessionId);
		if (said.activity != null && !session.activities.includes(said.activity)) throw invalid(`${said.activity} is not among this study's activities. Add it to the study first.`);
		const participantId = said.participantCode === undefined ? said.participantId : await participantOf(tx, actor, said.participantCode);
		if (participantId) await requireParticipant(tx, actor, participantId);
		await tx
			.update(sessions)
			.set({ ...(participantId === undefined ? {} : { participantId }), ...(said.activity === undefined ? {} : { activity: said.activity }) })
			.where(eq(sessions.id, sessionId));
		await record(tx, actor, { action: 'session.described', subjectType: 'session', subjectId: sessionId, detail: { ...said } });
	});
}

async function participantOf(tx: Queryable, actor: Actor, code: string): Promise<string> {
	const upper = code.trim().toUpperCase();
	if (!/^[A-Z0-9][A-Z0-9-]{0,15}$/.test(upper)) throw invalid(`${code} cannot be a participant code: use up to 16 letters, digits and hyphens, such as P12. Never a name.`);
	await tx.insert(participants).values({ teamId: actor.teamId, code: upper }).onConflictDoNothing();
	const [participant] = await tx
		.select({ id: participants.id })
		.from(participants)
		.where(and(eq(participants.teamId, actor.teamId), eq(participants.code, upper)));
	return participant.id;
}

async function requireParticipant(tx: Queryable, actor: Actor, participantId: string): Promise<void> {
	const [there] = await tx
		.select({ id: participants.id })
		.from(participants)
		.where(and(eq(participants.teamId, actor.teamId), eq(participants.id, participantId)));
	if (!there) throw notFound('The participant');
}

/** An upload that the actor may sort: of the team, and for a contributor an own one. Its study's sorting is locked from here on. */
async function reachableUpload(tx: Queryable, actor: Actor, uploadId: string): Promise<{ upload: Upload; recording: FiledRecording | null }> {
	authorise(actor, 'recording.upload');
	const own = may(actor.role, 'session.sort') ? undefined : eq(uploads.uploadedBy, actor.memberId);
	const wanted = and(eq(uploads.teamId, actor.teamId), eq(uploads.id, uploadId), own);
	const [seen] = await tx.select({ studyId: uploads.studyId }).from(uploads).where(wanted);
	if (!seen) throw notFound('The file');
	// The sorting first, the row second, as everybody does: two decisions at once wait for each other instead of blocking.
	await lockSorting(tx, seen.studyId);
	const [upload] = await tx.select().from(uploads).where(wanted).for('update');
	if (!upload) throw notFound('The file');
	const [recording] = upload.recordingId ? await tx.select().from(recordings).where(eq(recordings.id, upload.recordingId)) : [];
	return { upload, recording: recording ?? null };
}

async function ownUpload(tx: Queryable, actor: Actor, uploadId: string): Promise<{ upload: Upload; recording: FiledRecording }> {
	const { upload, recording } = await reachableUpload(tx, actor, uploadId);
	if (recording === null) throw conflict(`${upload.fileName} is not read yet, or was refused. Look again in a moment.`);
	return { upload, recording };
}

async function requireStudyDevice(tx: Queryable, upload: Upload, deviceModelId: string): Promise<void> {
	const devices = await devicesOfStudy(tx, upload.teamId, upload.studyId);
	if (!devices.some((d) => d.modelId === deviceModelId)) throw invalid('This device is not among the devices of the study. Add it to the study first.');
}

async function requireOpen(tx: Queryable, sessionId: string | null): Promise<void> {
	if (sessionId === null) return;
	const [session] = await tx.select({ code: sessions.code, state: sessions.state }).from(sessions).where(eq(sessions.id, sessionId)).for('update');
	if (session && isClosed(session.state)) {
		throw conflict(`${session.code} is ${session.state}, so nothing goes in or out. A reviewer can hand it back first.`);
	}
}

/** The target's code, when the recording may go there. */
async function requireRoomFor(tx: Queryable, actor: Actor, upload: Upload, deviceModelId: string, sessionId: string): Promise<string> {
	const [session] = await tx
		.select({ code: sessions.code, memberId: participants.memberId })
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(and(eq(sessions.teamId, actor.teamId), eq(sessions.studyId, upload.studyId), eq(sessions.id, sessionId)));
	if (!session || (seesOwnSessionsOnly(actor) && session.memberId !== actor.memberId)) throw notFound('The session');
	await requireOpen(tx, sessionId);
	const [taken] = await tx
		.select({ fileName: recordings.fileName, device: deviceModels.name })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(recordings.sessionId, sessionId), eq(recordings.deviceModelId, deviceModelId)));
	if (taken) throw conflict(`${session.code} already has ${taken.fileName} from the ${taken.device}. Move that one first, or say that one of the two is another device.`);
	return session.code;
}

async function settleAsFiled(tx: Queryable, upload: Upload, messageCode: string, message: string): Promise<void> {
	await tx.update(uploads).set({ state: 'filed', progress: 1, question: null, messageCode, message, finishedAt: new Date() }).where(eq(uploads.id, upload.id));
}

async function correctDevice(tx: Queryable, sink: JobSink, upload: Upload, recording: FiledRecording, deviceModelId: string): Promise<void> {
	if (recording.sessionId === null) {
		const uploader = await uploaderOf(tx, upload.teamId, upload.uploadedBy);
		await noteOutcome(tx, upload.id, recording.id, await fileRecording(tx, sink, uploader, recording, deviceModelId));
		return;
	}
	await requireOpen(tx, recording.sessionId);
	const [taken] = await tx
		.select({ fileName: recordings.fileName, code: sessions.code })
		.from(recordings)
		.innerJoin(sessions, eq(sessions.id, recordings.sessionId))
		.where(and(eq(recordings.sessionId, recording.sessionId), eq(recordings.deviceModelId, deviceModelId)));
	if (taken && recording.deviceModelId !== deviceModelId) throw conflict(`${taken.code} already has ${taken.fileName} from that device. Move one of the two to another session first.`);
	const deviceUnitId = await unitOf(tx, upload.teamId, deviceModelId, recording.device);
	await tx.update(recordings).set({ deviceModelId, deviceUnitId }).where(eq(recordings.id, recording.id));
	await putIntoSession(tx, sink, { ...recording, deviceModelId, deviceUnitId }, recording.sessionId, null);
}

async function keyOf(tx: Queryable, recording: FiledRecording): Promise<string> {
	const [raw] = await tx.select({ bytes: rawFiles.bytes }).from(rawFiles).where(eq(rawFiles.id, recording.rawFileId));
	const [study] = await tx.select({ activities: studies.activities }).from(studies).where(eq(studies.id, recording.studyId));
	return originKey(recording, recording.fileName, raw.bytes, study.activities);
}

/** Uploads of the team that ask for the device of the same origin; for a contributor the own ones. */
async function waitingForSameAnswer(tx: Queryable, actor: Actor, key: string): Promise<{ upload: Upload; recording: FiledRecording }[]> {
	return tx
		.select({ upload: uploads, recording: recordings })
		.from(uploads)
		.innerJoin(recordings, eq(recordings.id, uploads.recordingId))
		.where(
			and(
				eq(uploads.teamId, actor.teamId),
				eq(uploads.state, 'asking'),
				sql`${uploads.question}->>'code' = 'which-device' and ${uploads.question}->>'key' = ${key}`,
				may(actor.role, 'session.sort') ? undefined : eq(uploads.uploadedBy, actor.memberId)
			)
		)
		.orderBy(recordings.studyId, recordings.startS);
}
