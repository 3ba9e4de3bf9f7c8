/** People of a team: who is in it, roles, invitations, leaving. */
import { randomUUID } from 'node:crypto';
import { and, asc, count, eq, gt, isNull, sql } from 'drizzle-orm';
import { ROLES, type Role } from '../../roles';
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { authSessions, invitations, members, participants, users } from '../db/schema';
import { conflict, invalid, notFound } from '../errors';
import { sendMail } from '../mail/send';
import { record } from '../record/audit';
import type { Settings } from '../settings';
import { checkInitials } from './team';

export const INVITATION_DAYS = 14;

export interface Person {
	memberId: string;
	name: string | null;
	email: string;
	initials: string;
	role: Role;
	active: boolean;
	participantCode: string | null;
}

export async function peopleOf(db: Queryable, actor: Actor): Promise<{ people: Person[]; invited: { id: string; email: string; role: Role; expiresAt: Date }[] }> {
	authorise(actor, 'member.read');
	const people = await db
		.select({
			memberId: members.id,
			name: users.name,
			email: users.email,
			initials: members.initials,
			role: members.role,
			leftAt: members.leftAt,
			participantCode: participants.code
		})
		.from(members)
		.innerJoin(users, eq(users.id, members.userId))
		.leftJoin(participants, and(eq(participants.teamId, members.teamId), eq(participants.memberId, members.id)))
		.where(eq(members.teamId, actor.teamId))
		.orderBy(asc(members.role), asc(members.initials));
	const invited = await db
		.select({ id: invitations.id, email: invitations.email, role: invitations.role, expiresAt: invitations.expiresAt })
		.from(invitations)
		.where(and(eq(invitations.teamId, actor.teamId), isNull(invitations.acceptedAt), gt(invitations.expiresAt, new Date())))
		.orderBy(asc(invitations.email));
	return { people: people.map(({ leftAt, ...p }) => ({ ...p, active: leftAt === null })), invited };
}

/** Asks somebody by mail to join. An open invitation to the same address is replaced. */
export async function invite(db: Queryable, settings: Settings, actor: Actor, input: { email: string; role: Role; initials: string }): Promise<void> {
	authorise(actor, 'member.manage');
	const initials = checkInitials(input.initials);
	const email = input.email.trim().toLowerCase();
	const [already] = await db
		.select({ id: members.id })
		.from(members)
		.innerJoin(users, eq(users.id, members.userId))
		.where(and(eq(members.teamId, actor.teamId), eq(sql`lower(${users.email})`, email), isNull(members.leftAt)));
	if (already) throw conflict(`${email} is in the team already. Change the role in the list instead.`);
	await db.transaction(async (tx) => {
		await tx.delete(invitations).where(and(eq(invitations.teamId, actor.teamId), eq(sql`lower(${invitations.email})`, email), isNull(invitations.acceptedAt)));
		const id = randomUUID();
		await tx.insert(invitations).values({
			id,
			teamId: actor.teamId,
			email,
			role: input.role,
			initials,
			invitedBy: actor.userId,
			expiresAt: new Date(Date.now() + INVITATION_DAYS * 86_400_000)
		});
		await record(tx, actor, { action: 'member.invited', subjectType: 'invitation', subjectId: id, detail: { email, role: input.role } });
		// In the transaction: an invitation that could not be mailed is not left behind.
		await sendMail(settings, {
			to: email,
			subject: `${actor.teamName} asks you to join on Nonius`,
			text: [
				`${actor.initials} asks you to join ${actor.teamName} on Nonius as ${input.role}.`,
				'',
				`Sign in with this address at ${settings.origin}/signin and accept under Teams.`,
				'',
				`The invitation is open for ${INVITATION_DAYS} days. You get this mail because an owner of ${actor.teamName} typed your address; if you do not know them, do nothing.`
			].join('\n')
		});
	});
}

/** @throws DomainError conflict when it would leave the team without an owner */
export async function changeRole(db: Queryable, actor: Actor, memberId: string, role: Role): Promise<void> {
	authorise(actor, 'member.manage');
	if (!ROLES.includes(role)) throw invalid(`There is no role "${role}".`);
	await db.transaction(async (tx) => {
		const member = await lockMember(tx, actor, memberId);
		if (member.role === role) return;
		if (member.role === 'owner') await keepAnOwner(tx, actor, memberId);
		await tx.update(members).set({ role }).where(eq(members.id, memberId));
		await record(tx, actor, { action: 'member.role-changed', subjectType: 'member', subjectId: memberId, detail: { from: member.role, to: role, initials: member.initials } });
	});
}

/** Ends a membership. What the person wrote stays under the same initials; signing in leads to no team any more. */
export async function removeMember(db: Queryable, actor: Actor, memberId: string): Promise<void> {
	if (memberId !== actor.memberId) authorise(actor, 'member.manage');
	await db.transaction(async (tx) => {
		const member = await lockMember(tx, actor, memberId);
		if (member.role === 'owner') await keepAnOwner(tx, actor, memberId);
		await tx.update(members).set({ leftAt: new Date() }).where(eq(members.id, memberId));
		await tx.delete(authSessions).where(eq(authSessions.userId, member.userId));
		await record(tx, actor, { action: 'member.left', subjectType: 'member', subjectId: memberId, detail: { initials: member.initials, by: actor.initials } });
	});
}

/** Links a member to the participant code that he or she wears under: a contributor then sees those sessions. */
export async function linkParticipant(db: Queryable, actor: Actor, memberId: string, code: string): Promise<void> {
	authorise(actor, 'member.manage');
	const wanted = code.trim().toUpperCase();
	if (!/^[A-Z0-9][A-Z0-9-]{0,15}$/.test(wanted)) throw invalid('A participant code is up to 16 letters, digits and hyphens, such as P03.');
	await db.transaction(async (tx) => {
		const member = await lockMember(tx, actor, memberId);
		const [holder] = await tx.select().from(participants).where(and(eq(participants.teamId, actor.teamId), eq(participants.code, wanted)));
		if (holder?.memberId && holder.memberId !== memberId) throw conflict(`${wanted} belongs to another member. Choose another code.`);
		await tx.update(participants).set({ memberId: null }).where(and(eq(participants.teamId, actor.teamId), eq(participants.memberId, memberId)));
		if (holder) await tx.update(participants).set({ memberId }).where(eq(participants.id, holder.id));
		else await tx.insert(participants).values({ teamId: actor.teamId, code: wanted, memberId });
		await record(tx, actor, { action: 'member.participant-linked', subjectType: 'member', subjectId: memberId, detail: { initials: member.initials, code: wanted } });
	});
}

async function lockMember(tx: Queryable, actor: Actor, memberId: string) {
	const [member] = await tx
		.select()
		.from(members)
		.where(and(eq(members.teamId, actor.teamId), eq(members.id, memberId), isNull(members.leftAt)))
		.for('update');
	if (!member) throw notFound('This member');
	return member;
}

async function keepAnOwner(tx: Queryable, actor: Actor, memberId: string): Promise<void> {
	const [{ others }] = await tx
		.select({ others: count() })
		.from(members)
		.where(and(eq(members.teamId, actor.teamId), eq(members.role, 'owner'), isNull(members.leftAt), sql`${members.id} <> ${memberId}`));
	if (others === 0) throw conflict('This is the last owner. Make somebody else an owner first.');
}
