/** A session as the timeline needs it: recordings, newest offsets and tags, rounds of review, and what may be done. */
import { and, asc, desc, eq, gt, lt, or, sql } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { TimelineTrack } from '../../timeline/model';
import type { AlignmentState, ReviewRound, SessionDocument, Tag } from '../../timeline/model';
import { may } from '../../roles';
import { seesOwnSessionsOnly, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { alignments, annotations, annotationVersions, deviceModels, deviceUnits, members, participants, recordings, reviews, sessions, studies, studyDevices } from '../db/schema';
import { notFound } from '../errors';
import { studyBasis } from '../results/load-sessions';
import { sessionByCode, sessionById, type SessionRecord } from './access';
import { workersOn } from './own-work';
import { CAN_BE_HANDED_IN, isClosed } from './state';

/** @throws DomainError not-found when the team has no such session, or the actor does not see it */
export async function sessionDocument(db: Queryable, actor: Actor, studySlug: string, code: string): Promise<SessionDocument> {
	return documentOf(db, actor, await sessionByCode(db, actor, studySlug, code));
}

export async function sessionDocumentById(db: Queryable, actor: Actor, sessionId: string): Promise<SessionDocument> {
	return documentOf(db, actor, await sessionById(db, actor, sessionId));
}

async function documentOf(db: Queryable, actor: Actor, session: SessionRecord): Promise<SessionDocument> {
	const [study] = await db
		.select({ slug: studies.slug, title: studies.title })
		.from(studies)
		.where(and(eq(studies.teamId, actor.teamId), eq(studies.id, session.studyId)));
	if (!study) throw notFound('This session');
	const basis = await studyBasis(db, actor, session.studyId);
	const [wearer] = session.participantId
		? await db
				.select({ code: participants.code })
				.from(participants)
				.where(and(eq(participants.teamId, actor.teamId), eq(participants.id, session.participantId)))
		: [];
	return {
		sessionId: session.id,
		studyId: session.studyId,
		studySlug: study.slug,
		studyTitle: study.title,
		code: session.code,
		title: session.title,
		activity: session.activity,
		participantCode: wearer?.code ?? null,
		state: session.state,
		startsAtS: session.startsAt.getTime() / 1000,
		endsAtS: session.endsAt.getTime() / 1000,
		tracks: await tracksOf(db, session),
		alignments: await newestAlignments(db, session),
		tags: await newestTags(db, session),
		kinds: basis.kinds,
		plan: basis.plan,
		reviews: await rounds(db, session),
		can: await whatMayBeDone(db, actor, session),
		me: { initials: actor.initials, role: actor.role },
		...(await neighbours(db, actor, session))
	};
}

async function tracksOf(db: Queryable, session: SessionRecord): Promise<Omit<TimelineTrack, 'traces'>[]> {
	const rows = await db
		.select({
			recordingId: recordings.id,
			number: studyDevices.number,
			role: deviceModels.role,
			name: deviceModels.name,
			shortName: deviceModels.shortName,
			firmware: deviceUnits.firmware,
			fileName: recordings.fileName,
			warnings: recordings.warnings
		})
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.innerJoin(studyDevices, and(eq(studyDevices.deviceModelId, recordings.deviceModelId), eq(studyDevices.studyId, recordings.studyId)))
		.leftJoin(deviceUnits, eq(deviceUnits.id, recordings.deviceUnitId))
		.where(and(eq(recordings.teamId, session.teamId), eq(recordings.sessionId, session.id)))
		.orderBy(asc(studyDevices.number));
	return rows.map(({ firmware, ...row }) => ({ ...row, firmware: firmware ?? 'unknown' }));
}

async function newestAlignments(db: Queryable, session: SessionRecord): Promise<Record<string, AlignmentState>> {
	const rows = await db
		.selectDistinctOn([alignments.recordingId], {
			recordingId: alignments.recordingId,
			version: alignments.version,
			offsetS: alignments.offsetS,
			driftPpm: alignments.driftPpm,
			locked: alignments.locked,
			method: alignments.method,
			estimate: alignments.estimate
		})
		.from(alignments)
		.innerJoin(recordings, eq(recordings.id, alignments.recordingId))
		.where(and(eq(recordings.teamId, session.teamId), eq(recordings.sessionId, session.id)))
		.orderBy(alignments.recordingId, desc(alignments.version));
	return Object.fromEntries(rows.map(({ recordingId, ...alignment }) => [recordingId, alignment]));
}

async function newestTags(db: Queryable, session: SessionRecord): Promise<Tag[]> {
	const rows = await db
		.selectDistinctOn([annotationVersions.annotationId], {
			id: annotationVersions.annotationId,
			version: annotationVersions.version,
			recordingId: annotations.recordingId,
			kind: annotationVersions.kind,
			startS: annotationVersions.startS,
			endS: annotationVersions.endS,
			status: annotationVersions.status,
			cleanedOverride: annotationVersions.cleanedOverride,
			evidence: annotationVersions.evidence,
			note: annotationVersions.note,
			authorInitials: members.initials
		})
		.from(annotationVersions)
		.innerJoin(annotations, eq(annotations.id, annotationVersions.annotationId))
		.leftJoin(members, eq(members.id, annotationVersions.authorId))
		.where(and(eq(annotations.teamId, session.teamId), eq(annotations.sessionId, session.id)))
		.orderBy(annotationVersions.annotationId, desc(annotationVersions.version));
	return rows.map(({ authorInitials, ...tag }): Tag => ({ ...tag, authorInitials: authorInitials ?? '' })).sort((a, b) => a.startS - b.startS || a.id.localeCompare(b.id));
}

async function rounds(db: Queryable, session: SessionRecord): Promise<ReviewRound[]> {
	const submitter = alias(members, 'submitter');
	const reviewer = alias(members, 'reviewer');
	const rows = await db
		.select({ review: reviews, submittedBy: submitter.initials, reviewer: reviewer.initials })
		.from(reviews)
		.innerJoin(submitter, eq(submitter.id, reviews.submittedBy))
		.leftJoin(reviewer, eq(reviewer.id, reviews.reviewerId))
		.where(and(eq(reviews.teamId, session.teamId), eq(reviews.sessionId, session.id)))
		.orderBy(asc(reviews.round));
	return rows.map(({ review, submittedBy, reviewer: by }) => ({
		round: review.round,
		submittedBy,
		submittedAt: review.submittedAt.toISOString(),
		submitNote: review.submitNote,
		reviewer: by,
		decision: review.decision,
		comment: review.comment,
		decidedAt: review.decidedAt?.toISOString() ?? null,
		takenBackAt: review.takenBackAt?.toISOString() ?? null
	}));
}

async function whatMayBeDone(db: Queryable, actor: Actor, session: SessionRecord): Promise<SessionDocument['can']> {
	const open = !isClosed(session.state);
	const mayHandIn = may(actor.role, 'session.submit');
	return {
		align: open && may(actor.role, 'session.align'),
		annotate: open && may(actor.role, 'session.annotate'),
		// Handing in from `imported` is refused with what is missing; the page says the same before it asks.
		submit: mayHandIn && (CAN_BE_HANDED_IN.includes(session.state) || session.state === 'imported'),
		review: session.state === 'in review' && may(actor.role, 'session.review') && !(await workersOn(db, session)).has(actor.memberId),
		takeBack: session.state === 'in review' && mayHandIn,
		reopen: session.state === 'reviewed' && mayHandIn
	};
}

/** The sessions before and after, in the order of the study's list, among those the actor sees. */
async function neighbours(db: Queryable, actor: Actor, session: SessionRecord): Promise<{ previousCode: string | null; nextCode: string | null }> {
	const length = sql<number>`length(${sessions.code})`;
	const beside = async (direction: 'before' | 'after') => {
		const compare = direction === 'after' ? gt : lt;
		const order = direction === 'after' ? asc : desc;
		const [found] = await db
			.select({ code: sessions.code })
			.from(sessions)
			.leftJoin(participants, eq(participants.id, sessions.participantId))
			.where(
				and(
					eq(sessions.teamId, actor.teamId),
					eq(sessions.studyId, session.studyId),
					or(compare(length, session.code.length), and(eq(length, session.code.length), compare(sessions.code, session.code))),
					seesOwnSessionsOnly(actor) ? eq(participants.memberId, actor.memberId) : undefined
				)
			)
			.orderBy(order(length), order(sessions.code))
			.limit(1);
		return found?.code ?? null;
	};
	return { previousCode: await beside('before'), nextCode: await beside('after') };
}
