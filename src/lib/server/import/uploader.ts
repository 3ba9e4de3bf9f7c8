/** Whose upload it is: background work is done in the name of the person who uploaded. */
import { and, eq } from 'drizzle-orm';
import type { Role } from '../../roles';
import type { Queryable } from '../db/client';
import { members, participants } from '../db/schema';

export interface Uploader {
	teamId: string;
	memberId: string;
	userId: string;
	initials: string;
	role: Role;
	/** The uploader's own participant code, if one is linked. */
	ownParticipantId: string | null;
}

export async function uploaderOf(db: Queryable, teamId: string, memberId: string): Promise<Uploader> {
	const [member] = await db
		.select({ userId: members.userId, initials: members.initials, role: members.role, ownParticipantId: participants.id })
		.from(members)
		.leftJoin(participants, and(eq(participants.teamId, members.teamId), eq(participants.memberId, members.id)))
		.where(and(eq(members.teamId, teamId), eq(members.id, memberId)));
	return { teamId, memberId, ...member };
}
