import type { RequestHandler } from './$types';
import { eq } from 'drizzle-orm';
import { z } from 'zod';
import { users } from '$lib/server/db/schema';
import { isSecure } from '$lib/server/auth/auth';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';

/** The person's own theme; remembered in the browser too, for the pages before sign-in. */
export const PUT: RequestHandler = endpoint(async ({ locals, request, cookies }) => {
	const { theme } = z.object({ theme: z.enum(['system', 'light', 'dark']) }).parse(await jsonBody(request));
	if (locals.user) await locals.db.update(users).set({ theme }).where(eq(users.id, locals.user.id));
	cookies.set('nonius-theme', theme, { path: '/', httpOnly: true, sameSite: 'lax', secure: isSecure(locals.settings), maxAge: 31_536_000 });
	return new Response(null, { status: 204 });
});
