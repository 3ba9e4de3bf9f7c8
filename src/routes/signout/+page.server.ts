import { redirect } from '@sveltejs/kit';
import { eq } from 'drizzle-orm';
import { sessionCookieName } from '$lib/server/auth/auth';
import { authSessions } from '$lib/server/db/schema';
import type { Actions } from './$types';

export const load = () => redirect(303, '/signin');

export const actions: Actions = {
	default: async ({ locals, cookies }) => {
		const name = sessionCookieName(locals.settings);
		const token = cookies.get(name);
		if (token) await locals.db.delete(authSessions).where(eq(authSessions.sessionToken, token));
		cookies.delete(name, { path: '/' });
		redirect(303, '/signin');
	}
};
