/** Teams: making one, and the invitations that lead into one. */
import { and, eq, gt, isNull, sql } from 'drizzle-orm';
import { DEFAULT_TAG_KINDS } from '../../agreement/tag-kinds';
import type { Role } from '../../roles';
import type { Queryable } from '../db/client';
import { invitations, members, tagKinds, teams, users } from '../db/schema';
import { conflict, invalid, notFound } from '../errors';
import { record } from '../record/audit';
import type { SignedInUser } from '../auth/membership';

/** A short name for addresses from a title: lower case, digits, hyphens. */
export function slugFrom(title: string): string {
	const slug = title
		.normalize('NFKD')
		.replace(/\p{M}/gu, '')
		.toLowerCase()
		.replace(/[^a-z0-9]+/g, '-')
		.replace(/^-+|-+$/g, '')
		.slice(0, 60)
		.replace(/-+$/, '');
	if (!slug) throw invalid('The name needs at least one letter or digit.');
	return slug;
}

/** The first free one of `name`, `name-2`, `name-3`, … */
export async function freeSlug(wanted: string, taken: (slug: string) => Promise<boolean>): Promise<string> {
	for (let i = 1; ; i++) {
		const slug = i === 1 ? wanted : `${wanted}-${i}`;
		if (!(await taken(slug))) return slug;
	}
}

/** Makes a team with its maker as owner and the set of tag kinds that every team starts with. */
export async function createTeam(db: Queryable, user: SignedInUser, input: { name: string; initials: string }): Promise<{ slug: string }> {
	const name = input.name.trim();
	if (name.length < 1 || name.length > 120) throw invalid('A team’s name has 1 to 120 characters.');
	const initials = checkInitials(input.initials);
	return db.transaction(async (tx) => {
		const slug = await freeSlug(slugFrom(name), async (s) => (await tx.select({ id: teams.id }).from(teams).where(eq(teams.slug, s))).length > 0);
		const [team] = await tx.insert(teams).values({ name, slug }).returning({ id: teams.id });
		await tx.insert(members).values({ teamId: team.id, userId: user.id, role: 'owner', initials });
		await tx.insert(tagKinds).values(DEFAULT_TAG_KINDS.map((kind, position) => ({ teamId: team.id, ...kind, position })));
		await record(tx, { teamId: team.id, userId: user.id, initials }, { action: 'team.created', subjectType: 'team', subjectId: team.id, detail: { name } });
		return { slug };
	});
}

/** One to four capital letters or digits. */
export function checkInitials(value: string): string {
	const initials = value.trim().toUpperCase();
	if (!/^[\p{Lu}\d]{1,4}$/u.test(initials)) throw invalid('Initials are one to four letters or digits, such as RT.');
	return initials;
}

export interface OpenInvitation {
	id: string;
	teamName: string;
	role: Role;
	initials: string;
	expiresAt: Date;
}

/** Invitations that wait for this person's address. */
export async function openInvitations(db: Queryable, user: SignedInUser): Promise<OpenInvitation[]> {
	return db
		.select({ id: invitations.id, teamName: teams.name, role: invitations.role, initials: invitations.initials, expiresAt: invitations.expiresAt })
		.from(invitations)
		.innerJoin(teams, eq(teams.id, invitations.teamId))
		.where(and(eq(sql`lower(${invitations.email})`, user.email.toLowerCase()), isNull(invitations.acceptedAt), gt(invitations.expiresAt, new Date())));
}

/**
 * Joins the team that invited this person's address.
 * @throws DomainError not-found when the invitation is another's, used or too old; conflict when already a member
 */
export async function acceptInvitation(db: Queryable, user: SignedInUser, invitationId: string): Promise<{ slug: string }> {
	return db.transaction(async (tx) => {
		const [invitation] = await tx
			.select()
			.from(invitations)
			.where(and(eq(invitations.id, invitationId), eq(sql`lower(${invitations.email})`, user.email.toLowerCase()), isNull(invitations.acceptedAt)))
			.for('update');
		if (!invitation) throw notFound('This invitation');
		if (invitation.expiresAt <= new Date()) throw invalid('This invitation is too old. Ask the owner for a new one.');
		const [before] = await tx.select().from(members).where(and(eq(members.teamId, invitation.teamId), eq(members.userId, user.id)));
		if (before && before.leftAt === null) throw conflict('You are in this team already.');
		const initials = before?.initials ?? (await freeInitials(tx, invitation.teamId, invitation.initials));
		// Somebody who comes back is the same member: earlier work stays his or hers.
		const [member] = before
			? await tx.update(members).set({ leftAt: null, role: invitation.role }).where(eq(members.id, before.id)).returning({ id: members.id })
			: await tx.insert(members).values({ teamId: invitation.teamId, userId: user.id, role: invitation.role, initials }).returning({ id: members.id });
		await tx.update(invitations).set({ acceptedAt: new Date() }).where(eq(invitations.id, invitation.id));
		if (user.name === null) await tx.update(users).set({ name: initials }).where(eq(users.id, user.id));
		await record(tx, { teamId: invitation.teamId, userId: user.id, initials }, { action: 'member.joined', subjectType: 'member', subjectId: member.id, detail: { role: invitation.role } });
		const [team] = await tx.select({ slug: teams.slug }).from(teams).where(eq(teams.id, invitation.teamId));
		return team;
	});
}

/** The wished initials, or with a digit when a member has them. */
async function freeInitials(db: Queryable, teamId: string, wished: string): Promise<string> {
	const taken = new Set((await db.select({ initials: members.initials }).from(members).where(eq(members.teamId, teamId))).map((m) => m.initials));
	if (!taken.has(wished)) return wished;
	for (let i = 2; ; i++) {
		const next = `${wished.slice(0, 4 - String(i).length)}${i}`;
		if (!taken.has(next)) return next;
	}
}
