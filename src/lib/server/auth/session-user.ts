/** The person behind a browser's session cookie. Reads the table that Auth.js writes; keeps sessions in use alive. */
import type { Cookies } from '@sveltejs/kit';
import { and, eq, gt } from 'drizzle-orm';
import type { Queryable } from '../db/client';
import { authSessions, users } from '../db/schema';
import type { Settings } from '../settings';
import { isSecure, SESSION_DAYS, sessionCookieName } from './auth';
import type { SignedInUser } from './membership';

const DAY_MS = 86_400_000;

export async function userOfSession(db: Queryable, cookies: Cookies, settings: Settings): Promise<SignedInUser | null> {
	const name = sessionCookieName(settings);
	const token = cookies.get(name);
	if (!token) return null;
	const [found] = await db
		.select({ id: users.id, email: users.email, name: users.name, theme: users.theme, expires: authSessions.expires })
		.from(authSessions)
		.innerJoin(users, eq(users.id, authSessions.userId))
		.where(and(eq(authSessions.sessionToken, token), gt(authSessions.expires, new Date())));
	if (!found) return null;
	// A demo session lasts a day and is not stretched; others move on once a day while they are used.
	const left = found.expires.getTime() - Date.now();
	if (left > DAY_MS && left < (SESSION_DAYS - 1) * DAY_MS) {
		const expires = new Date(Date.now() + SESSION_DAYS * DAY_MS);
		await db.update(authSessions).set({ expires }).where(eq(authSessions.sessionToken, token));
		cookies.set(name, token, { path: '/', httpOnly: true, sameSite: 'lax', secure: isSecure(settings), expires });
	}
	const { expires: _expires, ...user } = found;
	return user;
}
