/**
 * Sessions with everything that pairing needs: heart-rate traces, current offsets, accepted tags, plan and kinds.
 * One set of queries for one session or a whole study, so that a session's figures are the same wherever they stand.
 */
import { and, asc, desc, eq, inArray, isNotNull, sql } from 'drizzle-orm';
import type { AnalysisPlan } from '../../agreement/plan';
import type { PairingTag, TagKind, Texture } from '../../agreement/tag';
import type { Trace } from '../../formats/recording';
import { seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import {
	alignments,
	analysisPlans,
	annotations,
	annotationVersions,
	deviceModels,
	deviceUnits,
	members,
	participants,
	recordings,
	sessions,
	studyDevices,
	tagKinds,
	traces
} from '../db/schema';
import { notFound } from '../errors';

export interface LoadedTrack {
	recordingId: string;
	number: number;
	name: string;
	shortName: string;
	firmware: string;
	heartRate: Trace | null;
	alignment: { version: number; offsetS: number; driftPpm: number; method: string; reliable: boolean | null } | null;
	/** Accepted tags, on the recording's own clock. */
	tags: PairingTag[];
	/** Proposals nobody has settled yet. */
	proposals: number;
}

export interface LoadedSession {
	sessionId: string;
	code: string;
	title: string;
	activity: string | null;
	participantCode: string | null;
	state: (typeof sessions.$inferSelect)['state'];
	startsAt: Date;
	endsAt: Date;
	annotator: string | null;
	reference: LoadedTrack | null;
	wearables: LoadedTrack[];
	/** Changes whenever anything that the figures rest on changes. */
	fingerprint: string;
}

export interface StudyBasis {
	plan: AnalysisPlan;
	planVersion: number;
	kinds: TagKind[];
}

/** The study's current plan and the team's tag kinds, in their order. */
export async function studyBasis(db: Queryable, actor: Actor, studyId: string): Promise<StudyBasis> {
	const [plan] = await db
		.select({ body: analysisPlans.body, version: analysisPlans.version })
		.from(analysisPlans)
		.where(and(eq(analysisPlans.teamId, actor.teamId), eq(analysisPlans.studyId, studyId)))
		.orderBy(desc(analysisPlans.version))
		.limit(1);
	if (!plan) throw notFound('This study');
	const kinds = await db.select().from(tagKinds).where(eq(tagKinds.teamId, actor.teamId)).orderBy(asc(tagKinds.position));
	return {
		plan: plan.body,
		planVersion: plan.version,
		kinds: kinds.map(({ key, name, hotkey, texture, blames, primary, cleaned, meaning }) => ({
			key,
			name,
			hotkey,
			texture: texture as Texture,
			blames,
			primary,
			cleaned,
			meaning
		}))
	};
}

/** Sessions of a study that the actor may see, in code order. `withSamples: false` leaves the traces out. */
export async function loadSessions(
	db: Queryable,
	actor: Actor,
	studyId: string,
	options: { sessionIds?: string[]; withSamples?: boolean } = {}
): Promise<LoadedSession[]> {
	const rows = await db
		.select({
			id: sessions.id,
			code: sessions.code,
			title: sessions.title,
			activity: sessions.activity,
			state: sessions.state,
			startsAt: sessions.startsAt,
			endsAt: sessions.endsAt,
			participantCode: participants.code,
			annotator: members.initials
		})
		.from(sessions)
		.leftJoin(participants, eq(participants.id, sessions.participantId))
		.leftJoin(members, eq(members.id, sessions.annotatorId))
		.where(
			and(
				eq(sessions.teamId, actor.teamId),
				eq(sessions.studyId, studyId),
				options.sessionIds ? inArray(sessions.id, options.sessionIds) : undefined,
				seesOwnSessionsOnly(actor) ? eq(participants.memberId, actor.memberId) : undefined
			)
		)
		.orderBy(asc(sql`length(${sessions.code})`), asc(sessions.code));
	if (rows.length === 0) return [];
	const ids = rows.map((r) => r.id);

	const recordingRows = await db
		.select({
			id: recordings.id,
			sessionId: recordings.sessionId,
			number: studyDevices.number,
			name: deviceModels.name,
			shortName: deviceModels.shortName,
			firmware: deviceUnits.firmware
		})
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.innerJoin(studyDevices, and(eq(studyDevices.deviceModelId, recordings.deviceModelId), eq(studyDevices.studyId, recordings.studyId)))
		.leftJoin(deviceUnits, eq(deviceUnits.id, recordings.deviceUnitId))
		.where(and(eq(recordings.teamId, actor.teamId), inArray(recordings.sessionId, ids)))
		.orderBy(asc(studyDevices.number));
	const recordingIds = recordingRows.map((r) => r.id);

	const traceOf = new Map<string, Trace>();
	const alignmentOf = new Map<string, NonNullable<LoadedTrack['alignment']>>();
	const tagsOf = new Map<string, PairingTag[]>();
	const proposalsOf = new Map<string, number>();
	const tagVersions = new Map<string, string>();
	if (recordingIds.length > 0) {
		if (options.withSamples !== false) {
			const samples = await db
				.select({ recordingId: traces.recordingId, tS: traces.tS, value: traces.value })
				.from(traces)
				.where(and(inArray(traces.recordingId, recordingIds), eq(traces.kind, 'heartRate')));
			for (const s of samples) traceOf.set(s.recordingId, { kind: 'heartRate', tS: s.tS, value: s.value });
		}
		const offsets = await db
			.selectDistinctOn([alignments.recordingId], {
				recordingId: alignments.recordingId,
				version: alignments.version,
				offsetS: alignments.offsetS,
				driftPpm: alignments.driftPpm,
				method: alignments.method,
				reliable: sql<boolean | null>`(${alignments.estimate} ->> 'reliable')::boolean`
			})
			.from(alignments)
			.where(and(eq(alignments.teamId, actor.teamId), inArray(alignments.recordingId, recordingIds)))
			.orderBy(alignments.recordingId, desc(alignments.version));
		for (const { recordingId, ...alignment } of offsets) alignmentOf.set(recordingId, alignment);

		const tags = await db
			.selectDistinctOn([annotationVersions.annotationId], {
				annotationId: annotationVersions.annotationId,
				version: annotationVersions.version,
				recordingId: annotations.recordingId,
				kind: annotationVersions.kind,
				startS: annotationVersions.startS,
				endS: annotationVersions.endS,
				status: annotationVersions.status,
				cleanedOverride: annotationVersions.cleanedOverride
			})
			.from(annotationVersions)
			.innerJoin(annotations, eq(annotations.id, annotationVersions.annotationId))
			.where(and(eq(annotations.teamId, actor.teamId), inArray(annotations.sessionId, ids), isNotNull(annotations.recordingId)))
			.orderBy(annotationVersions.annotationId, desc(annotationVersions.version));
		for (const t of tags) {
			tagVersions.set(t.recordingId, `${tagVersions.get(t.recordingId) ?? ''}${t.annotationId}.${t.version};`);
			if (t.status === 'proposed') proposalsOf.set(t.recordingId, (proposalsOf.get(t.recordingId) ?? 0) + 1);
			if (t.status !== 'accepted') continue;
			const list = tagsOf.get(t.recordingId) ?? [];
			list.push({ kind: t.kind, startS: t.startS, endS: t.endS, cleanedOverride: t.cleanedOverride });
			tagsOf.set(t.recordingId, list);
		}
	}

	return rows.map((row) => {
		const tracks = recordingRows
			.filter((r) => r.sessionId === row.id)
			.map((r): LoadedTrack => ({
				recordingId: r.id,
				number: r.number,
				name: r.name,
				shortName: r.shortName,
				firmware: r.firmware ?? 'unknown',
				heartRate: traceOf.get(r.id) ?? null,
				alignment: alignmentOf.get(r.id) ?? null,
				tags: (tagsOf.get(r.id) ?? []).sort((a, b) => a.startS - b.startS),
				proposals: proposalsOf.get(r.id) ?? 0
			}));
		return {
			sessionId: row.id,
			code: row.code,
			title: row.title,
			activity: row.activity,
			participantCode: row.participantCode,
			state: row.state,
			startsAt: row.startsAt,
			endsAt: row.endsAt,
			annotator: row.annotator,
			reference: tracks.find((t) => t.number === 0) ?? null,
			wearables: tracks.filter((t) => t.number > 0),
			fingerprint: tracks.map((t) => `${t.recordingId}:${t.alignment?.version ?? 0}:${tagVersions.get(t.recordingId) ?? ''}`).join('|')
		};
	});
}
