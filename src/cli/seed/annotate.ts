/** Takes a session of the scenario as far as it has come: offsets, tags, hand-in, review. */
import { and, desc, eq } from 'drizzle-orm';
import type { Actor } from '../../lib/server/auth/actor';
import type { Queryable } from '../../lib/server/db/client';
import { alignments, annotations, annotationVersions, reviews, sessions } from '../../lib/server/db/schema';
import { record } from '../../lib/server/record/audit';
import { settleSessionState } from '../../lib/server/session/state';
import type { ImportedDemo } from './import-sessions';
import type { DemoTeam } from './team';
import { truthTags, type TruthTag } from './truth-tags';

const RETURNED_WITH = 'The half-rate on Corvane goes on after the end of its tag, until the readings jump back. Please set that edge again.';

export async function workOnSession(db: Queryable, team: DemoTeam, demo: ImportedDemo): Promise<void> {
	const { plan } = demo;
	if (plan.annotatedBy === undefined) return;
	const annotator = team.actors[plan.annotatedBy];
	await db.update(sessions).set({ annotatorId: annotator.memberId, state: 'annotating' }).where(eq(sessions.id, demo.sessionId));
	await placeOffsets(db, annotator, demo);
	await settleSessionState(db, annotator.teamId, demo.sessionId);

	const tags = truthTags(demo);
	const colleague = team.actors[plan.annotatedBy === 'RT' ? 'KM' : 'RT'];
	const half = plan.state === 'annotating' ? Math.ceil(tags.length / 2) : tags.length;
	for (const tag of tags.slice(0, half)) await addTag(db, annotator, demo, tag, 'accepted', '');
	for (const tag of tags.slice(half)) await addTag(db, colleague, demo, tag, 'proposed', 'Seen in passing; yours to decide.');
	if (plan.state === 'annotating') return;

	await handIn(db, annotator, demo, 1);
	if (plan.state === 'returned') await decide(db, team.actors[plan.reviewedBy ?? 'SO'], demo, 1, 'returned', RETURNED_WITH);
	if (plan.state === 'reviewed') await decide(db, team.actors[plan.reviewedBy ?? 'SO'], demo, 1, 'approved', '');
}

/** The annotator looks at every proposal; one in three is put at the peak again and locked. */
async function placeOffsets(db: Queryable, actor: Actor, demo: ImportedDemo): Promise<void> {
	for (const [number, recordingId] of demo.recordingIds) {
		if (number === 0 || (demo.plan.seed + number) % 3 !== 0) continue;
		const [newest] = await db.select().from(alignments).where(eq(alignments.recordingId, recordingId)).orderBy(desc(alignments.version)).limit(1);
		if (!newest) continue;
		await db.insert(alignments).values({ teamId: actor.teamId, recordingId, version: newest.version + 1, offsetS: newest.offsetS, method: 'peak', locked: true, estimate: newest.estimate, authorId: actor.memberId });
		await record(db, actor, { action: 'alignment.changed', subjectType: 'recording', subjectId: recordingId, detail: { offsetS: newest.offsetS, method: 'peak' } });
	}
}

async function addTag(db: Queryable, actor: Actor, demo: ImportedDemo, tag: TruthTag, status: 'accepted' | 'proposed', note: string): Promise<void> {
	const recordingId = demo.recordingIds.get(tag.number);
	if (recordingId === undefined) return;
	const [annotation] = await db.insert(annotations).values({ teamId: actor.teamId, sessionId: demo.sessionId, recordingId }).returning({ id: annotations.id });
	await db.insert(annotationVersions).values({ teamId: actor.teamId, annotationId: annotation.id, version: 1, kind: tag.kind, startS: tag.startS, endS: tag.endS, status, note, authorId: actor.memberId });
	await record(db, actor, { action: 'tag.added', subjectType: 'annotation', subjectId: annotation.id, detail: { kind: tag.kind, session: demo.code } });
}

async function handIn(db: Queryable, actor: Actor, demo: ImportedDemo, round: number): Promise<void> {
	await db.insert(reviews).values({ teamId: actor.teamId, sessionId: demo.sessionId, round, submittedBy: actor.memberId });
	await db.update(sessions).set({ state: 'in review' }).where(eq(sessions.id, demo.sessionId));
	await record(db, actor, { action: 'session.submitted', subjectType: 'session', subjectId: demo.sessionId, detail: { round } });
}

async function decide(db: Queryable, actor: Actor, demo: ImportedDemo, round: number, decision: 'approved' | 'returned', comment: string): Promise<void> {
	await db
		.update(reviews)
		.set({ reviewerId: actor.memberId, decision, comment, decidedAt: new Date() })
		.where(and(eq(reviews.sessionId, demo.sessionId), eq(reviews.round, round)));
	await db.update(sessions).set({ state: decision === 'approved' ? 'reviewed' : 'returned' }).where(eq(sessions.id, demo.sessionId));
	await record(db, actor, { action: `session.${decision}`, subjectType: 'session', subjectId: demo.sessionId, detail: { round, comment } });
}
