/** Takes in an uploaded file: keeps the bytes once, makes its row and its job, all in one transaction. */
import { createHash } from 'node:crypto';
import { and, eq, ne } from 'drizzle-orm';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { participants, rawFiles, recordings, sessions, uploads } from '../db/schema';
import { notAllowed } from '../errors';
import { tooLargeSentence } from '../../import/file-size';
import { QUEUES, type JobSink } from '../jobs/queue';
import { record } from '../record/audit';

/** Where the deployment says nothing else. */
const LARGEST_FILE_BYTES = 64 * 1024 * 1024;

export interface UploadedFile {
	fileName: string;
	bytes: Uint8Array;
}

export interface Receipt {
	uploadId: string;
	fileName: string;
	/** `waiting`: it will be read. `refused`: the sentence says why, and nothing of the file is kept. */
	state: 'waiting' | 'refused';
	message: string | null;
}

/** What an upload needs to know of its study. */
export interface UploadStudy {
	id: string;
	title: string;
}

/**
 * Takes in several files; each stands or falls by itself. Bytes that the study already holds are told as a
 * duplicate, bytes that are too many or none are refused with a sentence.
 */
export async function receiveFiles(db: Queryable, sink: JobSink, actor: Actor, study: UploadStudy, files: readonly UploadedFile[], largestBytes = LARGEST_FILE_BYTES): Promise<Receipt[]> {
	authorise(actor, 'recording.upload');
	await requireOwnCode(db, actor);
	const receipts: Receipt[] = [];
	for (const file of files) {
		receipts.push(await db.transaction((tx) => receiveFile(tx, sink, actor, study, file, largestBytes)));
	}
	return receipts;
}

/** A contributor's recordings belong to the contributor's own code; without one they would belong to nobody. */
async function requireOwnCode(db: Queryable, actor: Actor): Promise<void> {
	if (!seesOwnSessionsOnly(actor)) return;
	const own = await db
		.select({ id: participants.id })
		.from(participants)
		.where(and(eq(participants.teamId, actor.teamId), eq(participants.memberId, actor.memberId)));
	if (own.length === 0) {
		throw notAllowed(`No participant code is yours in ${actor.teamName} yet, so your recordings would belong to nobody. Ask an owner to give you a code, then upload again.`);
	}
}

async function receiveFile(tx: Queryable, sink: JobSink, actor: Actor, study: UploadStudy, file: UploadedFile, largestBytes: number): Promise<Receipt> {
	const fileName = cleanName(file.fileName);
	const sizeRefusal = refusalBySize(file.bytes.byteLength, largestBytes);
	if (sizeRefusal) return refuseAtTheDoor(tx, actor, study, fileName, sizeRefusal.code, sizeRefusal.message);

	const kept = await keepBytes(tx, actor.teamId, file.bytes);
	const earlier = await earlierUpload(tx, study.id, kept.rawFileId);
	if (earlier) return refuseAtTheDoor(tx, actor, study, fileName, 'duplicate', await duplicateSentence(tx, actor, earlier));

	const message = kept.isNew ? null : 'These bytes are already kept for another study of the team; they were not stored again.';
	const [upload] = await tx
		.insert(uploads)
		.values({ teamId: actor.teamId, studyId: study.id, uploadedBy: actor.memberId, fileName, rawFileId: kept.rawFileId, state: 'waiting', progress: 0.25, message })
		.returning({ id: uploads.id });
	await sink.add(tx, QUEUES.readUpload, { uploadId: upload.id });
	await record(tx, actor, { action: 'upload.received', subjectType: 'upload', subjectId: upload.id, detail: { fileName, sha256: kept.sha256, sizeBytes: file.bytes.byteLength } });
	return { uploadId: upload.id, fileName, state: 'waiting', message };
}

/** Keeps bytes once per team. */
export async function keepBytes(tx: Queryable, teamId: string, bytes: Uint8Array): Promise<{ rawFileId: string; sha256: string; isNew: boolean }> {
	const sha256 = createHash('sha256').update(bytes).digest('hex');
	const [added] = await tx.insert(rawFiles).values({ teamId, sha256, sizeBytes: bytes.byteLength, bytes }).onConflictDoNothing().returning({ id: rawFiles.id });
	if (added) return { rawFileId: added.id, sha256, isNew: true };
	// Held until this transaction ends, so that a refusal elsewhere does not let go of them meanwhile.
	const [there] = await tx
		.select({ id: rawFiles.id })
		.from(rawFiles)
		.where(and(eq(rawFiles.teamId, teamId), eq(rawFiles.sha256, sha256)))
		.for('key share');
	if (!there) throw new Error('The same bytes were let go of in this very moment; upload the file again.');
	return { rawFileId: there.id, sha256, isNew: false };
}

/** The living upload of the same bytes in the study, if there is one. */
export async function earlierUpload(tx: Queryable, studyId: string, rawFileId: string) {
	const [earlier] = await tx
		.select({ uploadId: uploads.id, fileName: uploads.fileName, uploadedBy: uploads.uploadedBy, sessionCode: sessions.code })
		.from(uploads)
		.leftJoin(recordings, eq(recordings.id, uploads.recordingId))
		.leftJoin(sessions, eq(sessions.id, recordings.sessionId))
		.where(and(eq(uploads.studyId, studyId), eq(uploads.rawFileId, rawFileId), ne(uploads.state, 'refused')));
	return earlier ?? null;
}

export async function duplicateSentence(tx: Queryable, actor: Pick<Actor, 'role' | 'memberId' | 'teamId'>, earlier: NonNullable<Awaited<ReturnType<typeof earlierUpload>>>): Promise<string> {
	if (actor.role === 'contributor' && earlier.uploadedBy !== actor.memberId) return 'The study already holds these very bytes, so nothing was stored. There is nothing to do.';
	const where = earlier.sessionCode === null ? 'still on its way in' : `in ${earlier.sessionCode}`;
	return `The same file, byte for byte, is already here as ${earlier.fileName}, ${where}. One was kept; there is nothing to do.`;
}

function refusalBySize(sizeBytes: number, largestBytes: number): { code: string; message: string } | null {
	if (sizeBytes === 0) return { code: 'empty', message: 'The file is empty (0 bytes), so nothing was stored. Export it again from the device or its program.' };
	if (sizeBytes <= largestBytes) return null;
	return { code: 'too-large', message: `${tooLargeSentence(sizeBytes, largestBytes)} Nothing was stored.` };
}

async function refuseAtTheDoor(tx: Queryable, actor: Actor, study: UploadStudy, fileName: string, code: string, message: string): Promise<Receipt> {
	const [upload] = await tx
		.insert(uploads)
		.values({ teamId: actor.teamId, studyId: study.id, uploadedBy: actor.memberId, fileName, state: 'refused', messageCode: code, message, finishedAt: new Date() })
		.returning({ id: uploads.id });
	return { uploadId: upload.id, fileName, state: 'refused', message };
}

/** File names are shown and kept, never used as paths; control characters go, folders stay out. */
function cleanName(fileName: string): string {
	const name = (fileName.split(/[\\/]/).at(-1) ?? '').replace(/\p{Cc}/gu, '').trim();
	return name === '' ? 'unnamed file' : name.slice(0, 200);
}
