/** One-click sign-in for demo people: only in demo mode, only from this very machine. */
import { randomBytes } from 'node:crypto';
import { asc, eq } from 'drizzle-orm';
import type { Role } from '../../roles';
import type { Queryable } from '../db/client';
import { authSessions, members, teams, users } from '../db/schema';
import { notAllowed } from '../errors';
import { isLoopback, type Settings } from '../settings';

/** Addresses of demo people end so; `.example` belongs to nobody (RFC 2606). */
export const DEMO_DOMAIN = 'bramling.example';

const LOOPBACK_CLIENT = /^(127\.\d+\.\d+\.\d+|::1|::ffff:127\.\d+\.\d+\.\d+)$/;

/** Does the request come from this machine, to this machine, in demo mode, without a proxy in between? */
export function demoAllowed(settings: Pick<Settings, 'demo'>, clientAddress: string, headers: Headers): boolean {
	const host = headers.get('host') ?? '';
	const hostName = host.startsWith('[') ? host.slice(0, host.indexOf(']') + 1) : host.split(':')[0];
	return settings.demo && LOOPBACK_CLIENT.test(clientAddress) && isLoopback(hostName) && !headers.has('x-forwarded-for') && !headers.has('forwarded');
}

export interface DemoPerson {
	email: string;
	name: string;
	initials: string;
	role: Role;
	teamName: string;
}

/** People that one click can sign in as, in the order of what they may do. */
export async function demoPeople(db: Queryable): Promise<DemoPerson[]> {
	const rows = await db
		.select({ email: users.email, name: users.name, initials: members.initials, role: members.role, teamName: teams.name })
		.from(users)
		.innerJoin(members, eq(members.userId, users.id))
		.innerJoin(teams, eq(teams.id, members.teamId))
		.orderBy(asc(members.role), asc(members.initials));
	return rows.filter((r) => r.email.endsWith(`@${DEMO_DOMAIN}`)).map((r) => ({ ...r, name: r.name ?? r.initials }));
}

/**
 * Opens a session for a demo person.
 * @returns token and expiry for the session cookie
 * @throws DomainError when the address is no demo person's
 */
export async function openDemoSession(db: Queryable, email: string): Promise<{ token: string; expires: Date }> {
	const person = (await demoPeople(db)).find((p) => p.email === email);
	if (!person) throw notAllowed('One-click sign-in is for the demo people only. Sign in with a link by mail instead.');
	const [user] = await db.select({ id: users.id }).from(users).where(eq(users.email, email));
	const token = randomBytes(32).toString('hex');
	const expires = new Date(Date.now() + 86_400_000);
	await db.insert(authSessions).values({ sessionToken: token, userId: user.id, expires });
	return { token, expires };
}
