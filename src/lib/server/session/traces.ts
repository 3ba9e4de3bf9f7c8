/** Samples of a session's recordings. */
import { createHash } from 'node:crypto';
import { and, asc, eq, inArray } from 'drizzle-orm';
import { CHANNEL_KINDS, type ChannelKind, type Trace } from '../../formats/recording';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { deviceModels, recordings, studyDevices, traces } from '../db/schema';
import { sessionById } from './access';

/** Channels that the timeline draws or the figures rest on; the others stay in the database. */
const TIMELINE_KINDS: ChannelKind[] = ['heartRate', 'cadence'];

export interface RecordingTraces {
	recordingId: string;
	traces: Trace[];
}

function isChannelKind(kind: string): kind is ChannelKind {
	return (CHANNEL_KINDS as readonly string[]).includes(kind);
}

const within = (actor: Actor, sessionId: string) => and(eq(recordings.teamId, actor.teamId), eq(recordings.sessionId, sessionId), inArray(traces.kind, TIMELINE_KINDS));

/** Changes whenever a recording comes, goes or is read anew; samples themselves never change. */
export async function tracesTag(db: Queryable, actor: Actor, sessionId: string): Promise<string> {
	await sessionById(db, actor, sessionId);
	const rows = await db
		.select({ id: traces.id })
		.from(traces)
		.innerJoin(recordings, eq(recordings.id, traces.recordingId))
		.where(within(actor, sessionId))
		.orderBy(asc(traces.id));
	return `"${createHash('sha256').update(rows.map((r) => r.id).join()).digest('base64url').slice(0, 27)}"`;
}

/** Samples by recording, in the order of the plates; recordings without samples are in it with none. */
export async function sessionTraces(db: Queryable, actor: Actor, sessionId: string): Promise<RecordingTraces[]> {
	await sessionById(db, actor, sessionId);
	const held = await db
		.select({ recordingId: recordings.id })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.innerJoin(studyDevices, and(eq(studyDevices.deviceModelId, recordings.deviceModelId), eq(studyDevices.studyId, recordings.studyId)))
		.where(and(eq(recordings.teamId, actor.teamId), eq(recordings.sessionId, sessionId)))
		.orderBy(asc(studyDevices.number));
	const rows = await db
		.select({ recordingId: traces.recordingId, kind: traces.kind, tS: traces.tS, value: traces.value })
		.from(traces)
		.innerJoin(recordings, eq(recordings.id, traces.recordingId))
		.where(within(actor, sessionId));
	return held.map(({ recordingId }) => ({
		recordingId,
		traces: rows
			.flatMap((r): Trace[] => (r.recordingId === recordingId && isChannelKind(r.kind) ? [{ kind: r.kind, tS: r.tS, value: r.value }] : []))
			.sort((a, b) => TIMELINE_KINDS.indexOf(a.kind) - TIMELINE_KINDS.indexOf(b.kind))
	}));
}
