/** Takes a session of the scenario as far as it has come, with the commands that the pages use. */
import { randomUUID } from 'node:crypto';
import { desc, eq } from 'drizzle-orm';
import type { Actor } from '../../lib/server/auth/actor';
import type { Queryable } from '../../lib/server/db/client';
import { alignments } from '../../lib/server/db/schema';
import { decideReview } from '../../lib/server/review/decide';
import { submitSession } from '../../lib/server/review/hand-in';
import { saveAlignment } from '../../lib/server/session/alignment';
import { saveTag } from '../../lib/server/session/tag';
import type { ImportedDemo } from './import-sessions';
import type { DemoTeam } from './team';
import { truthTags, type TruthTag } from './truth-tags';

const RETURNED_WITH = 'The half-rate on Corvane goes on after the end of its tag, until the readings jump back. Please set that edge again.';

export async function workOnSession(db: Queryable, team: DemoTeam, demo: ImportedDemo): Promise<void> {
	const { state, annotatedBy, reviewedBy } = demo.plan;
	if (annotatedBy === undefined) return;
	const annotator = team.actors[annotatedBy];
	await placeOffsets(db, annotator, demo);

	const tags = truthTags(demo);
	const done = state === 'annotating' ? tags.slice(0, Math.ceil(tags.length / 2)) : tags;
	for (const tag of done) await addTag(db, annotator, demo, tag, 'accepted', '');
	if (state === 'annotating') {
		const colleague = team.actors[annotatedBy === 'RT' ? 'KM' : 'RT'];
		for (const tag of tags.slice(done.length)) await addTag(db, colleague, demo, tag, 'proposed', 'Seen in passing; yours to decide.');
		return;
	}
	await submitSession(db, annotator, demo.sessionId, '');
	if (reviewedBy === undefined) return;
	await decideReview(db, team.actors[reviewedBy], demo.sessionId, state === 'returned' ? 'returned' : 'approved', state === 'returned' ? RETURNED_WITH : '');
}

/** The annotator looks at every proposal and locks one in three. An offset that is not reliable is set by the eye, here by the truth. */
async function placeOffsets(db: Queryable, actor: Actor, demo: ImportedDemo): Promise<void> {
	for (const [number, recordingId] of demo.recordingIds) {
		if (number === 0) continue;
		const [newest] = await db.select().from(alignments).where(eq(alignments.recordingId, recordingId)).orderBy(desc(alignments.version)).limit(1);
		const isReliable = newest?.estimate?.reliable === true;
		if (isReliable && (demo.plan.seed + number) % 3 !== 0) continue;
		const offsetS = isReliable ? newest.offsetS : Math.round(demo.session.wearables[number - 1].truth.bestFitShiftS * 100) / 100;
		await saveAlignment(db, actor, recordingId, newest?.version ?? 0, { offsetS, driftPpm: 0, locked: true, method: isReliable ? 'peak' : 'hand' });
	}
}

async function addTag(db: Queryable, actor: Actor, demo: ImportedDemo, tag: TruthTag, status: 'accepted' | 'proposed', note: string): Promise<void> {
	const recordingId = demo.recordingIds.get(tag.number);
	if (recordingId === undefined) return;
	const { kind, startS, endS } = tag;
	await saveTag(db, actor, demo.sessionId, randomUUID(), 0, { recordingId, kind, startS, endS, status, cleanedOverride: null, note });
}
