/** Saving an offset: a further version, or a refusal that carries both when somebody else's stands there already. */
import { and, desc, eq } from 'drizzle-orm';
import { z } from 'zod';
import type { AlignmentContent } from '../../timeline/model';
import type { TheirVersion } from '../../timeline/saving';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { alignments, deviceModels, members, recordings } from '../db/schema';
import { conflict, invalid, notFound } from '../errors';
import { record } from '../record/audit';
import { holdSession, requireOpen } from './access';
import { noteEdit, type SavedEdit } from './edit';

export const AlignmentToSave = z.object({
	offsetS: z.number().min(-1e10).max(1e10),
	driftPpm: z.number().min(-100_000).max(100_000),
	locked: z.boolean(),
	method: z.enum(['proposed', 'peak', 'candidate', 'hand'])
});
export type AlignmentToSave = z.infer<typeof AlignmentToSave>;

/** Offsets are set to the hundredth; this far from the search's own value they still are that value, s. */
const SAME_OFFSET_S = 0.0051;

type Stored = typeof alignments.$inferSelect;

/**
 * Appends a version of a wearable's offset.
 *
 * The same edit sent twice (its first answer was lost) is answered with the version that it has already.
 *
 * @param baseVersion the version that the edit was made on; 0 = none
 * @throws DomainError conflict with `theirs` when another version stands on top of the base
 */
export async function saveAlignment(db: Queryable, actor: Actor, recordingId: string, baseVersion: number, wanted: AlignmentToSave): Promise<SavedEdit> {
	authorise(actor, 'session.align');
	return db.transaction(async (tx) => {
		const seen = await wearableOf(tx, actor, recordingId);
		const session = await holdSession(tx, actor, seen.sessionId);
		requireOpen(session);
		// Read again now that the session is held: the recording may have been moved to another one in between.
		const recording = await wearableOf(tx, actor, recordingId);
		if (recording.sessionId !== session.id) throw conflict(`${recording.name} was moved to another session meanwhile. Load the page again.`);

		const versions = await tx.select().from(alignments).where(eq(alignments.recordingId, recordingId)).orderBy(desc(alignments.version));
		const current = versions.at(0) ?? null;
		const sentBefore = versions.find((v) => v.version === baseVersion + 1);
		if (sentBefore?.authorId === actor.memberId && sameOffset(sentBefore, wanted)) return { version: sentBefore.version, state: session.state };
		// What stands says the same already, whoever said it: nothing is lost, and there is nothing to choose.
		if (current && sameOffset(current, wanted)) return { version: current.version, state: session.state };
		if ((current?.version ?? 0) !== baseVersion) throw conflict(`The offset of ${recording.name} was changed meanwhile.`, { theirs: current && (await theirVersion(tx, current)) });
		requireHonestMethod(wanted, current, versions);

		const version = baseVersion + 1;
		await tx.insert(alignments).values({ teamId: actor.teamId, recordingId, version, ...wanted, estimate: current?.estimate ?? null, authorId: actor.memberId });
		await record(tx, actor, {
			action: 'alignment.changed',
			subjectType: 'recording',
			subjectId: recordingId,
			detail: { session: session.code, version, from: current && offsetWords(current), to: offsetWords(wanted) }
		});
		return { version, state: await noteEdit(tx, actor, session, false) };
	});
}

async function wearableOf(tx: Queryable, actor: Actor, recordingId: string): Promise<{ sessionId: string; name: string }> {
	const [recording] = await tx
		.select({ sessionId: recordings.sessionId, role: deviceModels.role, name: deviceModels.name })
		.from(recordings)
		.innerJoin(deviceModels, eq(deviceModels.id, recordings.deviceModelId))
		.where(and(eq(recordings.teamId, actor.teamId), eq(recordings.id, recordingId)));
	if (!recording?.sessionId) throw notFound('This recording');
	if (recording.role === 'reference') throw invalid('The reference’s clock is the axis: it has no offset.');
	return { sessionId: recording.sessionId, name: recording.name };
}

const sameOffset = (a: AlignmentToSave, b: AlignmentToSave): boolean => a.offsetS === b.offsetS && a.driftPpm === b.driftPpm && a.locked === b.locked && a.method === b.method;

const offsetWords = ({ offsetS, driftPpm, locked, method }: AlignmentToSave) => ({ offsetS, driftPpm, locked, method });

/** `proposed`, `peak` and `candidate` say where a value comes from, so it has to be that value. */
function requireHonestMethod(wanted: AlignmentToSave, current: Stored | null, versions: readonly Stored[]): void {
	const near = (offsetS: number | null | undefined) => offsetS !== null && offsetS !== undefined && Math.abs(offsetS - wanted.offsetS) <= SAME_OFFSET_S;
	if (wanted.method === 'proposed' && !versions.some((v) => v.method === 'proposed' && v.offsetS === wanted.offsetS))
		throw invalid('This offset was never proposed. Send it as set by hand.');
	if (wanted.method === 'peak' && !near(current?.estimate?.bestFitShiftS)) throw invalid('This offset is not at the peak. Send it as set by hand.');
	if (wanted.method === 'candidate' && !current?.estimate?.candidates.some((c) => near(c.shiftS))) throw invalid('This offset is none of the candidates. Send it as set by hand.');
}

async function theirVersion(db: Queryable, stored: Stored): Promise<TheirVersion> {
	const [author] = stored.authorId ? await db.select({ initials: members.initials }).from(members).where(eq(members.id, stored.authorId)) : [];
	const content: AlignmentContent = { ...offsetWords(stored), estimate: stored.estimate };
	return { version: stored.version, content: { of: 'alignment', ...content }, authorInitials: author?.initials ?? '' };
}
