/** One-click sign-in for demo people: only in demo mode, only from this very machine. */
import { randomBytes } from 'node:crypto';
import { and, asc, eq, isNull, like } from 'drizzle-orm';
import type { RequestEvent } from '@sveltejs/kit';
import type { Role } from '../../roles';
import type { Queryable } from '../db/client';
import { authSessions, members, teams, users } from '../db/schema';
import { notAllowed } from '../errors';
import { isLoopback, type Settings } from '../settings';

/** Addresses of demo people end so; `.example` belongs to nobody (RFC 2606). */
export const DEMO_DOMAIN = 'bramling.example';

const LOOPBACK_CLIENT = /^(127\.\d+\.\d+\.\d+|::1|::ffff:127\.\d+\.\d+\.\d+)$/;

/** Any of these says that somebody else's request was passed on. */
const PROXY_HEADERS = ['forwarded', 'via', 'x-forwarded-for', 'x-forwarded-host', 'x-forwarded-proto', 'x-real-ip'];

/** Does the request come from this machine, to this machine, in demo mode, without a proxy in between? */
export function demoAllowed(settings: Pick<Settings, 'demo'>, clientAddress: string, headers: Headers): boolean {
	const host = headers.get('host') ?? '';
	const hostName = host.startsWith('[') ? host.slice(0, host.indexOf(']') + 1) : host.split(':')[0];
	return settings.demo && LOOPBACK_CLIENT.test(clientAddress) && isLoopback(hostName) && !PROXY_HEADERS.some((name) => headers.has(name));
}

/** The same for a request as it came in. Who has gone meanwhile has no address and is nobody. */
export function demoAllowedFor({ locals, request, getClientAddress }: Pick<RequestEvent, 'locals' | 'request' | 'getClientAddress'>): boolean {
	if (!locals.settings.demo) return false;
	let address: string;
	try {
		address = getClientAddress();
	} catch {
		return false;
	}
	return demoAllowed(locals.settings, address, request.headers);
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
		.where(and(like(users.email, `%@${DEMO_DOMAIN}`), isNull(members.leftAt)))
		.orderBy(asc(members.role), asc(members.initials));
	return rows.map((r) => ({ ...r, name: r.name ?? r.initials }));
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
