/** Saving a tag: a further version of it, or a refusal that carries both when somebody else's stands there already. */
import { and, desc, eq } from 'drizzle-orm';
import { z } from 'zod';
import type { TheirVersion } from '../../timeline/saving';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { annotations, annotationVersions, members, recordings, tagKinds } from '../db/schema';
import { conflict, invalid, notFound } from '../errors';
import { record } from '../record/audit';
import { holdSession, requireOpen } from './access';
import { noteEdit, type SavedEdit } from './edit';

/** Shortest tag, s, with slack for times that were counted forth and back between two clocks. */
const SHORTEST_S = 2 - 1e-6;
const LONGEST_NOTE = 4000;

export const TagToSave = z.object({
	recordingId: z.uuid(),
	kind: z.string().min(1).max(60),
	startS: z.number().min(-1e11).max(1e11),
	endS: z.number().min(-1e11).max(1e11),
	status: z.enum(['proposed', 'accepted', 'crossed out', 'removed']),
	cleanedOverride: z.enum(['in', 'out']).nullable(),
	note: z.string().max(LONGEST_NOTE)
});
export type TagToSave = z.infer<typeof TagToSave>;

type Stored = typeof annotationVersions.$inferSelect;

/**
 * Makes a tag, changes it, settles it or removes it: each is a further version, and no version is ever lost.
 *
 * The page makes the tag's id, so that the same tag sent twice is kept once; the same edit sent twice is answered with
 * the version that it has already.
 *
 * @param baseVersion the version that the edit was made on; 0 = the tag is new
 * @throws DomainError conflict with `theirs` when another version stands on top of the base
 */
export async function saveTag(db: Queryable, actor: Actor, sessionId: string, tagId: string, baseVersion: number, wanted: TagToSave): Promise<SavedEdit> {
	authorise(actor, 'session.annotate');
	return db.transaction(async (tx) => {
		const session = await holdSession(tx, actor, sessionId);
		requireOpen(session);
		await requireSound(tx, actor, sessionId, wanted);

		await tx.insert(annotations).values({ id: tagId, teamId: actor.teamId, sessionId, recordingId: wanted.recordingId }).onConflictDoNothing({ target: annotations.id });
		const [tag] = await tx
			.select()
			.from(annotations)
			.where(and(eq(annotations.teamId, actor.teamId), eq(annotations.id, tagId)));
		if (tag?.sessionId !== sessionId || tag.recordingId !== wanted.recordingId) throw invalid('This tag’s id belongs to a tag elsewhere. Make the tag again.');

		const versions = await tx.select().from(annotationVersions).where(eq(annotationVersions.annotationId, tagId)).orderBy(desc(annotationVersions.version));
		const current = versions.at(0) ?? null;
		const sentBefore = versions.find((v) => v.version === baseVersion + 1);
		if (sentBefore?.authorId === actor.memberId && sameTag(sentBefore, wanted)) return { version: sentBefore.version, state: session.state };
		// What stands says the same already, whoever said it: nothing is lost, and there is nothing to choose.
		if (current && sameTag(current, wanted)) return { version: current.version, state: session.state };
		if ((current?.version ?? 0) !== baseVersion) throw conflict('This tag was changed meanwhile.', { theirs: current && (await theirVersion(tx, current, wanted.recordingId)) });

		const version = baseVersion + 1;
		const { recordingId: _, ...content } = wanted;
		await tx.insert(annotationVersions).values({ teamId: actor.teamId, annotationId: tagId, version, ...content, evidence: current?.evidence ?? '', authorId: actor.memberId });
		await record(tx, actor, {
			action: actionOf(current, wanted),
			subjectType: 'annotation',
			subjectId: tagId,
			detail: { session: session.code, version, from: current && tagWords(current), to: tagWords(wanted) }
		});
		return { version, state: await noteEdit(tx, actor, session, true) };
	});
}

async function requireSound(tx: Queryable, actor: Actor, sessionId: string, wanted: TagToSave): Promise<void> {
	const [recording] = await tx
		.select({ id: recordings.id })
		.from(recordings)
		.where(and(eq(recordings.teamId, actor.teamId), eq(recordings.sessionId, sessionId), eq(recordings.id, wanted.recordingId)));
	if (!recording) throw notFound('The recording of this tag');
	const [kind] = await tx
		.select({ key: tagKinds.key })
		.from(tagKinds)
		.where(and(eq(tagKinds.teamId, actor.teamId), eq(tagKinds.key, wanted.kind)));
	if (!kind) throw invalid(`This team has no tag kind “${wanted.kind}”. Load the page again to see the kinds that there are.`);
	if (wanted.endS - wanted.startS < SHORTEST_S) throw invalid('A tag is at least 2 s long and ends after it starts.');
}

type TagContentStored = Omit<TagToSave, 'recordingId'>;

const tagWords = ({ kind, startS, endS, status, cleanedOverride, note }: TagContentStored) => ({ kind, startS, endS, status, cleanedOverride, note });

const sameTag = (a: TagContentStored, b: TagContentStored): boolean =>
	a.kind === b.kind && a.startS === b.startS && a.endS === b.endS && a.status === b.status && a.cleanedOverride === b.cleanedOverride && a.note === b.note;

/** What the record calls it. */
function actionOf(current: Stored | null, wanted: TagToSave): string {
	if (!current) return 'tag.added';
	if (current.status !== wanted.status) return `tag.${{ proposed: 'proposed', accepted: 'accepted', 'crossed out': 'crossed-out', removed: 'removed' }[wanted.status]}`;
	return 'tag.changed';
}

async function theirVersion(db: Queryable, stored: Stored, recordingId: string): Promise<TheirVersion> {
	const [author] = stored.authorId ? await db.select({ initials: members.initials }).from(members).where(eq(members.id, stored.authorId)) : [];
	const authorInitials = author?.initials ?? '';
	return { version: stored.version, content: { of: 'tag', recordingId, ...tagWords(stored), evidence: stored.evidence, authorInitials }, authorInitials };
}
