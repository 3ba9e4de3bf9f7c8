/**
 * The background job of one upload: read the bytes, then either a recording with all its traces, its device and its
 * place among the sessions, or a refusal that leaves nothing but its sentence. Both are one transaction: a worker that
 * dies at any moment leaves the upload as it was, and the job is done again.
 */
import { and, eq, inArray, sql } from 'drizzle-orm';
import { traceOf, type Recording } from '../../formats/recording';
import type { Queryable } from '../db/client';
import { deviceModels, rawFiles, recordings, studies, traces, uploads } from '../db/schema';
import { EngineStopped, type Engine, type ReadEntry } from '../jobs/engine';
import { QUEUE_SCHEMA, QUEUES, type JobSink } from '../jobs/queue';
import { record } from '../record/audit';
import { devicesOfStudy, rememberedModel, type StudyDevice } from './device';
import { fileRecording, lockSorting, noteOutcome, type FiledRecording } from './filing';
import { guessDevice, originKey } from './origin';
import { duplicateSentence, earlierUpload, keepBytes } from './receive';
import { uploaderOf, type Uploader } from './uploader';

type Upload = typeof uploads.$inferSelect;

const NO_HEART_RATE = 'no-heart-rate';

/** Does the job. Done already, or taken back meanwhile: nothing happens. */
export async function readUpload(db: Queryable, engine: Engine, sink: JobSink, uploadId: string): Promise<void> {
	const started = await startReading(db, uploadId);
	if (started === null) return;
	const { fileName, bytes } = started;

	let entries: ReadEntry[];
	try {
		entries = await engine.read(bytes, fileName);
	} catch (cause) {
		if (!(cause instanceof EngineStopped)) throw cause;
		await inOneGo(db, uploadId, (tx, upload) => refuse(tx, upload, cause.code, `${cause.message} Nothing was stored. Export the session alone, in another format if there is one.`));
		return;
	}
	await inOneGo(db, uploadId, async (tx, upload) => {
		const uploader = await uploaderOf(tx, upload.teamId, upload.uploadedBy);
		if (entries.length === 1 && entries[0].bytes === null && entries[0].fileName === fileName) await settle(tx, sink, uploader, upload, entries[0], bytes);
		else await unpack(tx, sink, uploader, upload, entries);
	});
}

/** Marks the upload as being read and gives its bytes; null when there is nothing left to do. */
async function startReading(db: Queryable, uploadId: string): Promise<{ fileName: string; bytes: Uint8Array } | null> {
	const [upload] = await db
		.update(uploads)
		.set({ state: 'reading', progress: 0.5 })
		.where(and(eq(uploads.id, uploadId), inArray(uploads.state, ['waiting', 'reading'])))
		.returning({ fileName: uploads.fileName, rawFileId: uploads.rawFileId });
	if (!upload?.rawFileId) return null;
	const [raw] = await db.select({ bytes: rawFiles.bytes }).from(rawFiles).where(eq(rawFiles.id, upload.rawFileId));
	return raw ? { fileName: upload.fileName, bytes: raw.bytes } : null;
}

/** The study's sorting and the upload's row held, in one transaction, if it is still to be settled. */
async function inOneGo(db: Queryable, uploadId: string, settleIt: (tx: Queryable, upload: Upload) => Promise<void>): Promise<void> {
	await db.transaction(async (tx) => {
		const [seen] = await tx.select({ studyId: uploads.studyId }).from(uploads).where(eq(uploads.id, uploadId));
		if (!seen) return;
		await lockSorting(tx, seen.studyId);
		const [upload] = await tx.select().from(uploads).where(eq(uploads.id, uploadId)).for('update');
		if (upload && (upload.state === 'reading' || upload.state === 'waiting')) await settleIt(tx, upload);
	});
}

async function settle(tx: Queryable, sink: JobSink, uploader: Uploader, upload: Upload, entry: ReadEntry, bytes: Uint8Array): Promise<void> {
	if (!entry.reading.ok) {
		await refuse(tx, upload, entry.reading.refusal.code, entry.reading.refusal.message);
		return;
	}
	if (!traceOf(entry.reading.recording, 'heartRate')) {
		await refuse(tx, upload, NO_HEART_RATE, noHeartRateSentence(entry.reading.recording));
		return;
	}
	const recording = await storeRecording(tx, upload, entry.reading.recording);
	await record(tx, uploader, {
		action: 'recording.imported',
		subjectType: 'recording',
		subjectId: recording.id,
		detail: { fileName: upload.fileName, format: recording.format, readerVersion: recording.readerVersion, warnings: recording.warnings.length }
	});
	await recogniseAndFile(tx, sink, uploader, upload, recording, bytes);
}

function noHeartRateSentence(read: Recording): string {
	const holds = read.traces.length > 0 ? `It holds ${read.traces.map((t) => t.kind).join(', ')} and no heart rate` : 'It holds no heart rate';
	return `${holds}, so there is nothing to compare. Look whether the sensor was connected, and export the recording again with heart rate.`;
}

async function storeRecording(tx: Queryable, upload: Upload, read: Recording): Promise<FiledRecording> {
	if (upload.rawFileId === null) throw new Error('An upload that is read has its bytes.');
	const [recording] = await tx
		.insert(recordings)
		.values({
			teamId: upload.teamId,
			studyId: upload.studyId,
			rawFileId: upload.rawFileId,
			fileName: upload.fileName,
			format: read.format,
			readerVersion: read.readerVersion,
			device: read.device,
			activity: read.activity,
			warnings: read.warnings,
			startS: read.startS,
			endS: read.endS,
			uploadedBy: upload.uploadedBy
		})
		.returning();
	for (const trace of read.traces) {
		await tx.insert(traces).values({ recordingId: recording.id, kind: trace.kind, n: trace.tS.length, tS: trace.tS, value: trace.value });
	}
	return recording;
}

async function recogniseAndFile(tx: Queryable, sink: JobSink, uploader: Uploader, upload: Upload, recording: FiledRecording, bytes: Uint8Array): Promise<void> {
	const devices = await devicesOfStudy(tx, upload.teamId, upload.studyId);
	const key = originKey(recording, upload.fileName, bytes, await activitiesOf(tx, upload.studyId));
	const remembered = await rememberedModel(tx, upload.teamId, key);
	if (remembered !== null && devices.some((d) => d.modelId === remembered)) {
		await noteOutcome(tx, upload.id, recording.id, await fileRecording(tx, sink, uploader, recording, remembered));
		return;
	}
	const suggested = guessDevice(recording, upload.fileName, devices);
	await noteOutcome(tx, upload.id, recording.id, {
		state: 'asking',
		sessionId: null,
		messageCode: 'which-device',
		message: await whichDeviceSentence(tx, recording, remembered, suggested),
		question: { code: 'which-device', key, suggestedModelId: suggested?.modelId ?? null }
	});
}

async function whichDeviceSentence(tx: Queryable, recording: FiledRecording, remembered: string | null, suggested: StudyDevice | null): Promise<string> {
	if (remembered !== null) {
		const [model] = await tx.select({ name: deviceModels.name }).from(deviceModels).where(eq(deviceModels.id, remembered));
		return `Files of this origin are the ${model.name}'s, which is not among this study's devices. Which device made this one?`;
	}
	const { maker, product, serial } = recording.device;
	const name = [maker, product].filter(Boolean).join(' ');
	const says = name || serial ? `It names ${[name, serial ? `serial number ${serial}` : ''].filter(Boolean).join(', ')}, not seen before.` : 'It does not say which device made it.';
	return suggested ? `${says} What it says fits the ${suggested.name}.` : says;
}

async function activitiesOf(tx: Queryable, studyId: string): Promise<string[]> {
	const [study] = await tx.select({ activities: studies.activities }).from(studies).where(eq(studies.id, studyId));
	return study.activities;
}

/** An archive: every file inside becomes an upload of its own, in the archive's place. */
async function unpack(tx: Queryable, sink: JobSink, uploader: Uploader, upload: Upload, entries: ReadEntry[]): Promise<void> {
	for (const entry of entries) {
		const row = { teamId: upload.teamId, studyId: upload.studyId, uploadedBy: upload.uploadedBy, fileName: entry.fileName };
		const refused = (messageCode: string, message: string) => tx.insert(uploads).values({ ...row, state: 'refused', messageCode, message, finishedAt: new Date() });
		if (!entry.reading.ok) {
			await refused(entry.reading.refusal.code, entry.reading.refusal.message);
			continue;
		}
		if (!traceOf(entry.reading.recording, 'heartRate')) {
			await refused(NO_HEART_RATE, noHeartRateSentence(entry.reading.recording));
			continue;
		}
		if (entry.bytes === null) throw new Error('An archive gives the bytes of its entries.');
		const kept = await keepBytes(tx, upload.teamId, entry.bytes);
		const earlier = await earlierUpload(tx, upload.studyId, kept.rawFileId);
		if (earlier) {
			await refused('duplicate', await duplicateSentence(tx, uploader, earlier));
			continue;
		}
		const [own] = await tx.insert(uploads).values({ ...row, rawFileId: kept.rawFileId, state: 'reading', progress: 0.5 }).returning();
		await settle(tx, sink, uploader, own, entry, entry.bytes);
	}
	await tx.delete(uploads).where(eq(uploads.id, upload.id));
	await dropUnusedBytes(tx, upload.rawFileId);
}

/** Only the row with its sentence stays. */
async function refuse(tx: Queryable, upload: Upload, code: string, message: string): Promise<void> {
	await tx
		.update(uploads)
		.set({ state: 'refused', messageCode: code, message, question: null, rawFileId: null, recordingId: null, finishedAt: new Date() })
		.where(eq(uploads.id, upload.id));
	await dropUnusedBytes(tx, upload.rawFileId);
}

/** Lets go of bytes that no upload and no recording of the team needs. */
export async function dropUnusedBytes(tx: Queryable, rawFileId: string | null): Promise<void> {
	if (rawFileId === null) return;
	await tx.delete(rawFiles).where(
		and(
			eq(rawFiles.id, rawFileId),
			sql`not exists (select 1 from ${uploads} where ${uploads.rawFileId} = ${rawFileId})`,
			sql`not exists (select 1 from ${recordings} where ${recordings.rawFileId} = ${rawFileId})`
		)
	);
}

/** After the last try: the upload is refused and says so. */
export async function giveUpReading(db: Queryable, uploadId: string): Promise<void> {
	await inOneGo(db, uploadId, (tx, upload) =>
		refuse(tx, upload, 'reader-failed', 'Reading it failed several times for a fault of ours, not yours. Nothing was stored. Upload it again later, and keep the file for whoever looks after this server.')
	);
}

/** Uploads that wait for a job that does not exist any more. */
export async function unfinishedUploads(tx: Queryable): Promise<string[]> {
	const jobs = sql.raw(`${QUEUE_SCHEMA}.job`);
	const rows = await tx
		.select({ id: uploads.id })
		.from(uploads)
		.where(
			and(
				inArray(uploads.state, ['waiting', 'reading']),
				sql`not exists (select 1 from ${jobs} j where j.name = ${QUEUES.readUpload} and j.state in ('created', 'retry', 'active') and j.data->>'uploadId' = ${uploads.id}::text)`
			)
		)
		.for('update', { skipLocked: true });
	return rows.map((r) => r.id);
}
