/** Brings the scenario's files in through the real import, and answers what it asks, as the analysts would. */
import { and, eq } from 'drizzle-orm';
import type { Actor } from '../../lib/server/auth/actor';
import type { Queryable } from '../../lib/server/db/client';
import { recordings, sessions, uploads } from '../../lib/server/db/schema';
import { answerDevice } from '../../lib/server/import/answers';
import { receiveFiles, type UploadedFile } from '../../lib/server/import/receive';
import { engine } from '../../lib/server/jobs/in-process-engine';
import { JobList } from '../../lib/server/jobs/queue';
import { workOff } from '../../lib/server/jobs/work-off';
import type { DemoTeam } from './team';
import type { SimulatedDemo } from './simulated';

/** A session of the scenario as it stands in the database. */
export interface ImportedDemo extends SimulatedDemo {
	sessionId: string;
	code: string;
	/** Recording ids by device number. */
	recordingIds: Map<number, string>;
}

export async function importSession(db: Queryable, team: DemoTeam, demo: SimulatedDemo): Promise<ImportedDemo> {
	const uploader = team.actors[demo.plan.uploadedBy];
	const jobs = new JobList();
	const receipts = await receiveFiles(db, jobs, uploader, team.study, demo.files);
	await workOff(db, engine, jobs);
	for (const [i, receipt] of receipts.entries()) {
		const { number } = demo.files[i];
		const [upload] = await db.select().from(uploads).where(eq(uploads.id, receipt.uploadId));
		if (upload.state !== 'asking' || number === demo.plan.anonymous) continue;
		await answerDevice(db, jobs, team.actors.RT, upload.id, team.models[number]);
		await workOff(db, engine, jobs);
	}
	return { ...demo, ...(await placeOf(db, team, receipts.map((r) => r.uploadId), demo)) };
}

async function placeOf(db: Queryable, team: DemoTeam, uploadIds: string[], demo: SimulatedDemo): Promise<Pick<ImportedDemo, 'sessionId' | 'code' | 'recordingIds'>> {
	const recordingIds = new Map<number, string>();
	let place: { sessionId: string; code: string } | null = null;
	for (const [i, uploadId] of uploadIds.entries()) {
		const [found] = await db
			.select({ recordingId: recordings.id, sessionId: sessions.id, code: sessions.code })
			.from(uploads)
			.innerJoin(recordings, eq(recordings.id, uploads.recordingId))
			.innerJoin(sessions, eq(sessions.id, recordings.sessionId))
			.where(and(eq(uploads.id, uploadId), eq(uploads.teamId, team.actors.RT.teamId)));
		if (!found) continue;
		recordingIds.set(demo.files[i].number, found.recordingId);
		place = { sessionId: found.sessionId, code: found.code };
	}
	if (place === null) throw new Error(`No file of the session of ${demo.plan.start} found its place.`);
	return { ...place, recordingIds };
}

/** Files that do not become recordings: one without heart rate, one that is here already. */
export async function importLeftOvers(db: Queryable, team: DemoTeam, by: Actor, first: SimulatedDemo): Promise<void> {
	const track = ['<?xml version="1.0" encoding="UTF-8"?>', '<gpx version="1.1" creator="Corvane S"><trk><trkseg>', '<trkpt lat="0" lon="0"><time>2026-11-17T06:09:30Z</time></trkpt>', '<trkpt lat="0" lon="0"><time>2026-11-17T06:10:30Z</time></trkpt>', '</trkseg></trk></gpx>', ''];
	const files: UploadedFile[] = [
		{ fileName: 'route.gpx', bytes: new TextEncoder().encode(track.join('\n')) },
		{ fileName: 'halden copy.fit', bytes: first.files[0].bytes }
	];
	const jobs = new JobList();
	await receiveFiles(db, jobs, by, team.study, files);
	await workOff(db, engine, jobs);
}
