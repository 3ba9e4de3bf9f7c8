/** The study page: every session with its progress, its differences, and what to do next. */
import { and, desc, eq, inArray, isNotNull, isNull } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import { agreementFigures } from '../../agreement/figures';
import { valueOrNull } from '../../agreement/determinable';
import { pairsOf, type PairTable } from '../../agreement/pair-table';
import { may } from '../../roles';
import { progressOf, type SessionRow, type WearableCell } from '../../results/session-rows';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { members, reviews, sessions } from '../db/schema';
import { loadSessions, studyBasis, type LoadedSession, type LoadedTrack } from './load-sessions';
import { isAligned, sessionPairs, type WearablePairs } from './session-pairs';
import { groupOf } from './study-agreement';

/** Points of the difference strip in a table cell. */
const STRIP_POINTS = 92;

export interface NextStep {
	title: string;
	why: string;
	verb: string;
	href: string;
}

export interface StudyOverview {
	rows: SessionRow[];
	nextForYou: NextStep[];
	heldUp: string[];
	/** Figures over reviewed sessions; null while there are none, or where the role does not read figures. */
	soFar: { sessions: number; devices: { number: number; name: string; maeBpm: number | null; within5: number | null }[] } | null;
}

/** Everything the study page shows. */
export async function studyOverview(
	db: Queryable,
	actor: Actor,
	study: { id: string; slug: string },
	devices: { number: number; name: string }[]
): Promise<StudyOverview> {
	const basis = await studyBasis(db, actor, study.id);
	const loaded = await loadSessions(db, actor, study.id);
	const reviewers = await latestReviewers(db, actor, loaded.map((s) => s.sessionId));
	const wearables = devices.filter((d) => d.number > 0);
	const pairs = new Map(loaded.map((s) => [s.sessionId, sessionPairs(s, basis)]));

	const rows = loaded.map((session): SessionRow => {
		const found = pairs.get(session.sessionId) ?? [];
		return {
			code: session.code,
			title: session.title,
			activity: session.activity,
			participantCode: session.participantCode,
			startsAt: session.startsAt.toISOString(),
			minutes: Math.round((session.endsAt.getTime() - session.startsAt.getTime()) / 60_000),
			state: session.state,
			referenceCoverage: referenceCoverage(session),
			cells: wearables.map((d) => cellOf(session, d.number, found)),
			annotator: session.annotator,
			reviewer: reviewers.get(session.sessionId) ?? null,
			proposals: [session.reference, ...session.wearables].reduce((sum, t) => sum + (t?.proposals ?? 0), 0),
			next: nextOf(session)
		};
	});

	const reviewed = loaded.filter((s) => s.state === 'reviewed');
	const soFar =
		reviewed.length === 0 || !may(actor.role, 'agreement.read')
			? null
			: {
					sessions: reviewed.length,
					devices: wearables.map((d) => {
						const groups = reviewed.flatMap((s) => pairs.get(s.sessionId) ?? []).filter((p) => p.track.number === d.number).map((p) => groupOf(p, 'primary'));
						if (groups.every((g) => g.reference.length === 0)) return { number: d.number, name: d.name, maeBpm: null, within5: null };
						const figures = agreementFigures(groups);
						return { number: d.number, name: d.name, maeBpm: valueOrNull(figures.mae), within5: valueOrNull(figures.within5bpm) };
					})
				};

	return { rows, nextForYou: await nextForYou(db, actor, study, loaded), heldUp: heldUp(loaded), soFar };
}

/** Share of the session's seconds with a reference reading no further than the next one away. */
function referenceCoverage(session: LoadedSession): number | null {
	const trace = session.reference?.heartRate;
	if (!trace || trace.tS.length < 2) return null;
	const spanS = trace.tS[trace.tS.length - 1] - trace.tS[0];
	if (spanS <= 0) return null;
	let missingS = 0;
	for (let i = 1; i < trace.tS.length; i++) {
		const gapS = trace.tS[i] - trace.tS[i - 1];
		// A reading stands for 5 s at most: the longest step that pairing bridges by default.
		if (gapS > 5) missingS += gapS - 1;
	}
	return Math.max(0, 1 - missingS / spanS);
}

function cellOf(session: LoadedSession, number: number, found: WearablePairs[]): WearableCell {
	const track = session.wearables.find((t) => t.number === number);
	const empty = { number, strip: [], biasBpm: null, done: 0, underWay: false };
	if (!track) return { ...empty, state: 'not worn', words: 'not worn' };
	if (!session.reference) return { ...empty, state: 'no reference', done: 1, words: 'no reference' };
	const pairs = found.find((p) => p.track.recordingId === track.recordingId);
	if (!pairs) return { ...empty, state: track.alignment?.reliable === false ? 'unsure' : 'not aligned', done: 1, words: track.alignment?.reliable === false ? 'offset unsure' : 'not aligned' };
	const progress = progressOf(session.state === 'imported' ? 'aligned' : session.state);
	return { number, state: 'aligned', ...progress, words: null, strip: differenceStrip(pairs.table), biasBpm: primaryBias(pairs.table) };
}

function primaryBias(table: PairTable): number | null {
	const pairs = pairsOf(table, 'primary');
	return pairs.reference.length === 0 ? null : valueOrNull(agreementFigures([{ session: '', ...pairs }]).bias);
}

/** Mean difference per bucket of time, from the first to the last pair; an empty bucket is a gap. */
function differenceStrip(table: PairTable): (number | null)[] {
	if (table.n === 0) return [];
	const from = table.tS[0];
	const span = Math.max(1, table.tS[table.n - 1] - from);
	const sums = new Float64Array(STRIP_POINTS);
	const counts = new Uint32Array(STRIP_POINTS);
	for (let i = 0; i < table.n; i++) {
		const bucket = Math.min(STRIP_POINTS - 1, Math.floor(((table.tS[i] - from) / span) * STRIP_POINTS));
		sums[bucket] += table.wearable[i] - table.reference[i];
		counts[bucket]++;
	}
	return Array.from(sums, (sum, i) => (counts[i] === 0 ? null : Math.round((sum / counts[i]) * 100) / 100));
}

function nextOf(session: LoadedSession): SessionRow['next'] {
	if (!session.reference) return { words: 'Add the strap file', done: false };
	if (session.wearables.length === 0) return { words: 'Add a wearable', done: false };
	const unsure = session.wearables.filter((t: LoadedTrack) => !isAligned(t));
	const proposals = [session.reference, ...session.wearables].reduce((sum, t) => sum + t.proposals, 0);
	switch (session.state) {
		case 'imported':
			return { words: unsure.length === 1 ? `Align ${unsure[0].shortName}` : `Align ${unsure.length} traces`, done: false };
		case 'aligned':
			return { words: 'Annotate', done: false };
		case 'annotating':
			return { words: proposals > 0 ? `Settle ${proposals} proposal${proposals === 1 ? '' : 's'}` : 'Hand to review', done: false };
		case 'returned':
			return { words: 'Answer the reviewer', done: false };
		case 'in review':
			return { words: 'Review', done: false };
		case 'reviewed':
			return { words: 'Done', done: true };
	}
}

function heldUp(loaded: LoadedSession[]): string[] {
	return loaded
		.filter((s) => !s.reference)
		.map((s) => {
			const at = (d: Date) => d.toISOString().slice(11, 16);
			return `${s.code} has no reference from ${at(s.startsAt)} to ${at(s.endsAt)}. It stays out until a strap file arrives.`;
		});
}

async function latestReviewers(db: Queryable, actor: Actor, sessionIds: string[]): Promise<Map<string, string>> {
	if (sessionIds.length === 0) return new Map();
	const reviewer = alias(members, 'reviewer');
	const rows = await db
		.selectDistinctOn([reviews.sessionId], { sessionId: reviews.sessionId, initials: reviewer.initials })
		.from(reviews)
		.innerJoin(reviewer, eq(reviewer.id, reviews.reviewerId))
		.where(and(eq(reviews.teamId, actor.teamId), inArray(reviews.sessionId, sessionIds), isNotNull(reviews.decision)))
		.orderBy(reviews.sessionId, desc(reviews.round));
	return new Map(rows.map((r) => [r.sessionId, r.initials]));
}

/** At most four steps: what was handed back to you, what waits for your review, what you began, what is new. */
async function nextForYou(db: Queryable, actor: Actor, study: { id: string; slug: string }, loaded: LoadedSession[]): Promise<NextStep[]> {
	const href = (code: string) => `/studies/${study.slug}/sessions/${code}`;
	const steps: NextStep[] = [];
	if (may(actor.role, 'session.annotate')) {
		const returned = await db
			.selectDistinctOn([reviews.sessionId], { code: sessions.code, comment: reviews.comment, reviewer: members.initials, submittedBy: reviews.submittedBy })
			.from(reviews)
			.innerJoin(sessions, eq(sessions.id, reviews.sessionId))
			.innerJoin(members, eq(members.id, reviews.reviewerId))
			.where(and(eq(reviews.teamId, actor.teamId), eq(sessions.studyId, study.id), eq(sessions.state, 'returned'), eq(reviews.decision, 'returned')))
			.orderBy(reviews.sessionId, desc(reviews.round));
		for (const r of returned.filter((x) => x.submittedBy === actor.memberId))
			steps.push({ title: `Answer ${r.reviewer} in ${r.code}`, why: `“${r.comment}”`, verb: 'Read', href: href(r.code) });
	}
	if (may(actor.role, 'session.review')) {
		const waiting = await db
			.select({ code: sessions.code, by: members.initials, submittedBy: reviews.submittedBy, annotatorId: sessions.annotatorId })
			.from(reviews)
			.innerJoin(sessions, eq(sessions.id, reviews.sessionId))
			.innerJoin(members, eq(members.id, reviews.submittedBy))
			.where(and(eq(reviews.teamId, actor.teamId), eq(sessions.studyId, study.id), eq(sessions.state, 'in review'), isNull(reviews.decision)))
			.orderBy(reviews.submittedAt);
		for (const w of waiting.filter((x) => x.submittedBy !== actor.memberId && x.annotatorId !== actor.memberId))
			steps.push({ title: `Review ${w.code}`, why: `${w.by} handed it in.`, verb: 'Open', href: href(w.code) });
	}
	if (may(actor.role, 'session.annotate')) {
		for (const s of loaded) {
			if (s.state === 'annotating' && s.annotator === actor.initials) {
				const open = [s.reference, ...s.wearables].reduce((sum, t) => sum + (t?.proposals ?? 0), 0);
				steps.push({ title: open > 0 ? `Settle ${open} proposal${open === 1 ? '' : 's'} in ${s.code}` : `Hand in ${s.code}`, why: 'You have begun to annotate it.', verb: 'Go on', href: href(s.code) });
			} else if (s.state === 'imported' && s.reference && s.wearables.some((t) => t.alignment?.reliable === false))
				steps.push({ title: `Place an offset in ${s.code}`, why: 'The search could not tell where it belongs.', verb: 'Open', href: href(s.code) });
			else if (s.state === 'aligned') steps.push({ title: `Annotate ${s.code}`, why: `${s.activity ?? 'Activity not said'}, clocks are aligned.`, verb: 'Begin', href: href(s.code) });
		}
	}
	return steps.slice(0, 4);
}
