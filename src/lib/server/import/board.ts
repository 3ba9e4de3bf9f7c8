/** Gathers what the import page shows of a study. */
import { and, count, desc, eq, gt, inArray, isNull, or, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { BoardFile, BoardSession, ImportBoard } from '../../import/board';
import { may } from '../../roles';
import { authorise, seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { alignments, deviceModels, deviceUnits, members, participants, recordings, sessions, studies, uploads } from '../db/schema';
import { notFound } from '../errors';
import { offsetStands } from '../session/state';
import { devicesOfStudy } from './device';

/** Sessions on one page. */
const MOST_SESSIONS = 40;
/** Refused files are shown this long. */
const LEFT_OUT_DAYS = 7;

export async function importBoard(db: Queryable, actor: Actor, studyId: string): Promise<ImportBoard> {
	authorise(actor, 'recording.upload');
	const [study] = await db
		.select({ activities: studies.activities })
		.from(studies)
		.where(and(eq(studies.teamId, actor.teamId), eq(studies.id, studyId)));
	if (!study) throw notFound('The study');

	const ownOnly = seesOwnSessionsOnly(actor);
	const shown = await shownSessions(db, actor, studyId, ownOnly);
	const files = await filesOf(db, actor, studyId, shown.map((s) => s.sessionId), ownOnly);
	const devices = await devicesOfStudy(db, actor.teamId, studyId);
	const numberOf = new Map(devices.map((d) => [d.modelId, d.number]));
	const order = (f: BoardFile) => numberOf.get(f.recording?.deviceModelId ?? '') ?? 9;

	const people = await db
		.select({ participantId: participants.id, code: participants.code })
		.from(participants)
		.where(and(eq(participants.teamId, actor.teamId), ownOnly ? eq(participants.memberId, actor.memberId) : undefined))
		.orderBy(participants.code);
	return {
		devices,
		participants: people,
		activities: study.activities,
		sessions: shown.map((s): BoardSession => {
			const own = files.filter((f) => f.sessionId === s.sessionId).map((f) => f.file);
			own.sort((a, b) => order(a) - order(b));
			return { ...s, hasReference: own.some((f) => numberOf.get(f.recording?.deviceModelId ?? '') === 0), files: own };
		}),
		loose: files.filter((f) => f.sessionId === null && f.file.state !== 'refused').map((f) => f.file),
		leftOut: files.filter((f) => f.file.state === 'refused').map((f) => f.file),
		underWay: files.filter((f) => f.file.state === 'waiting' || f.file.state === 'reading').length,
		olderSessions: Math.max(0, (await countShownSessions(db, actor, studyId, ownOnly)) - shown.length),
		may: { upload: true, sort: may(actor.role, 'session.sort'), addDevices: may(actor.role, 'study.edit') }
	};
}

/** The sessions that import still concerns: not yet in annotation, or held up by a question. */
function concerned(actor: Actor, studyId: string, ownOnly: boolean) {
	const asked = sql`exists (select 1 from ${recordings} r join ${uploads} u on u.recording_id = r.id where r.session_id = ${sessions.id} and u.state = 'asking')`;
	return and(
		eq(sessions.teamId, actor.teamId),
		eq(sessions.studyId, studyId),
		or(inArray(sessions.state, ['imported', 'aligned']), asked),
		ownOnly ? eq(participants.memberId, actor.memberId) : undefined
	);
}

async function shownSessions(db: Queryable, actor: Actor, studyId: string, ownOnly: boolean) {
	const newest = await db
		.select({
			sessionId: sessions.id, code: sessions.code, state: sessions.state, participantId: sessions.participantId, participantCode: participants.code,
			activity: sessions.activity, startsAt: sessions.startsAt, endsAt: sessions.endsAt
		})
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(concerned(actor, studyId, ownOnly))
		.orderBy(desc(sessions.createdAt), desc(sessions.code))
		.limit(MOST_SESSIONS);
	return newest
		.map(({ startsAt, endsAt, ...s }) => ({ ...s, startS: startsAt.getTime() / 1000, endS: endsAt.getTime() / 1000 }))
		.sort((a, b) => b.startS - a.startS || a.code.localeCompare(b.code));
}

async function countShownSessions(db: Queryable, actor: Actor, studyId: string, ownOnly: boolean): Promise<number> {
	const [row] = await db
		.select({ n: count() })
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.where(concerned(actor, studyId, ownOnly));
	return row.n;
}

async function filesOf(db: Queryable, actor: Actor, studyId: string, sessionIds: string[], ownOnly: boolean): Promise<{ sessionId: string | null; file: BoardFile }[]> {
	const newestAlignment = alias(alignments, 'newest_alignment');
	const since = new Date(Date.now() - LEFT_OUT_DAYS * 86_400_000);
	const inSessions = sessionIds.length > 0 ? inArray(recordings.sessionId, sessionIds) : undefined;
	const rows = await db
		.select({
			uploadId: uploads.id, fileName: uploads.fileName, state: uploads.state, progress: uploads.progress, messageCode: uploads.messageCode,
			message: uploads.message, question: uploads.question, uploadedBy: members.initials,
			recordingId: recordings.id, sessionId: recordings.sessionId, deviceModelId: recordings.deviceModelId, firmware: deviceUnits.firmware,
			startS: recordings.startS, endS: recordings.endS, warnings: recordings.warnings, role: deviceModels.role,
			offsetS: newestAlignment.offsetS, method: newestAlignment.method, estimate: newestAlignment.estimate
		})
		.from(uploads)
		.innerJoin(members, eq(members.id, uploads.uploadedBy))
		.leftJoin(recordings, eq(recordings.id, uploads.recordingId))
		.leftJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.leftJoin(deviceUnits, eq(deviceUnits.id, recordings.deviceUnitId))
		.leftJoin(
			newestAlignment,
			and(
				eq(newestAlignment.recordingId, recordings.id),
				eq(newestAlignment.version, sql`(select max(version) from alignment where recording_id = ${recordings.id})`)
			)
		)
		.where(
			and(
				eq(uploads.teamId, actor.teamId),
				eq(uploads.studyId, studyId),
				or(inSessions, and(isNull(recordings.sessionId), sql`${uploads.state} not in ('refused', 'filed')`), and(eq(uploads.state, 'refused'), gt(uploads.createdAt, since))),
				// Own sessions may hold a colleague's file of the same wearer; loose and refused files are the uploader's.
				ownOnly ? or(inSessions, eq(uploads.uploadedBy, actor.memberId)) : undefined
			)
		)
		.orderBy(desc(uploads.createdAt), uploads.fileName);
	return rows.map((row) => ({
		sessionId: row.sessionId,
		file: {
			uploadId: row.uploadId, fileName: row.fileName, state: row.state, progress: row.progress, messageCode: row.messageCode,
			message: row.message, question: row.question, uploadedBy: row.uploadedBy,
			recording:
				row.recordingId === null || row.startS === null || row.endS === null
					? null
					: {
							recordingId: row.recordingId, deviceModelId: row.deviceModelId, firmware: row.firmware, startS: row.startS, endS: row.endS,
							warnings: row.warnings ?? [],
							offset:
								row.offsetS === null || row.method === null || row.role !== 'wearable'
									? null
									: { offsetS: row.offsetS, stands: offsetStands({ method: row.method, estimate: row.estimate }), reason: row.estimate?.reason ?? '' }
						}
		}
	}));
}
