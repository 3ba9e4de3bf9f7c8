import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { authOf, sessionCookieName } from '$lib/server/auth/auth';
import { demoAllowed, demoPeople, openDemoSession } from '$lib/server/auth/demo';
import { notAllowed } from '$lib/server/errors';
import { page } from '$lib/server/http/endpoint';
import type { Actions, PageServerLoad } from './$types';

/** What Auth.js tells by code, in words and with the way on. */
const TROUBLE: Record<string, string> = {
	Verification: 'This link has been used already, or is too old. Ask for a new one below.',
	OAuthAccountNotLinked: 'This address signs in another way. Use the link by mail.',
	AccessDenied: 'The provider did not vouch for an e-mail address. Use the link by mail, or ask your provider to verify it.',
	Configuration: 'Signing in did not work because of how this server is set up. Tell the person who runs it.'
};

export const load: PageServerLoad = async ({ locals, url, request, getClientAddress }) => {
	if (locals.user) redirect(303, '/studies');
	const code = url.searchParams.get('error');
	return {
		trouble: code ? (TROUBLE[code] ?? 'Signing in did not work. Try again, or use the link by mail.') : null,
		provider: locals.settings.oidc?.name ?? null,
		demo: demoAllowed(locals.settings, getClientAddress(), request.headers) ? await demoPeople(locals.db) : []
	};
};

export const actions: Actions = {
	mail: async (event) => {
		const form = await event.request.clone().formData();
		const email = z.email().safeParse(String(form.get('email') ?? '').trim());
		if (!email.success) return fail(400, { email: String(form.get('email') ?? ''), message: 'This is not an e-mail address. Check it for a missing @ or a space.' });
		await authOf(event.locals.db, event.locals.settings).signIn(event);
	},
	provider: async (event) => {
		await authOf(event.locals.db, event.locals.settings).signIn(event);
	},
	demo: async ({ locals, request, getClientAddress, cookies }) => {
		await page(async () => {
			if (!demoAllowed(locals.settings, getClientAddress(), request.headers))
				throw notAllowed('One-click sign-in works only in demo mode and on this very machine. Sign in with a link by mail instead.');
			const form = await request.formData();
			const { token, expires } = await openDemoSession(locals.db, String(form.get('email') ?? ''));
			cookies.set(sessionCookieName(locals.settings), token, { path: '/', httpOnly: true, sameSite: 'lax', secure: false, expires });
		});
		redirect(303, '/studies');
	}
};
