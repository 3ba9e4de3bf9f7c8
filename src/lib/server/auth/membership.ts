/** From a person to the teams he or she belongs to, and the one that is open. */
import { and, asc, eq, isNull } from 'drizzle-orm';
import type { Role } from '../../roles';
import type { Queryable } from '../db/client';
import { members, teams } from '../db/schema';
import type { Actor } from './actor';

export interface SignedInUser {
	id: string;
	email: string;
	name: string | null;
	theme: string;
}

export interface Membership {
	memberId: string;
	teamId: string;
	teamSlug: string;
	teamName: string;
	role: Role;
	initials: string;
}

/** Cookie that remembers which of several teams is open. */
export const TEAM_COOKIE = 'nonius-team';

export async function membershipsOf(db: Queryable, userId: string): Promise<Membership[]> {
	return db
		.select({
			memberId: members.id,
			teamId: teams.id,
			teamSlug: teams.slug,
			teamName: teams.name,
			role: members.role,
			initials: members.initials
		})
		.from(members)
		.innerJoin(teams, eq(teams.id, members.teamId))
		.where(and(eq(members.userId, userId), isNull(members.leftAt)))
		.orderBy(asc(teams.name));
}

/** The person as a member of the wanted team, else of the first one; null without a team. */
export function actorFrom(userId: string, memberships: Membership[], wantedTeamSlug: string | undefined): Actor | null {
	const membership = memberships.find((m) => m.teamSlug === wantedTeamSlug) ?? memberships[0];
	return membership ? { userId, ...membership } : null;
}
