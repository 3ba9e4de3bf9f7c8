import { fail, redirect, type RequestEvent } from '@sveltejs/kit';
import { AuthError } from '@auth/sveltekit';
import { z } from 'zod';
import { authOf, isSecure, LINK_MINUTES, LinkNotSent, sessionCookieName } from '$lib/server/auth/auth';
import { demoAllowedFor, demoPeople, openDemoSession } from '$lib/server/auth/demo';
import { wayBack } from '$lib/server/auth/way-back';
import { notAllowed } from '$lib/server/errors';
import { page } from '$lib/server/http/endpoint';
import { log } from '$lib/server/http/log';
import type { Actions, PageServerLoad } from './$types';

/** What Auth.js tells by code, in words and with the way on. */
const TROUBLE: Record<string, string> = {
	Verification: 'This link has been used already, or is too old. Ask for a new one below.',
	OAuthAccountNotLinked: 'This address signs in another way. Use the link by mail.',
	AccessDenied: 'The provider did not vouch for an e-mail address. Use the link by mail, or ask your provider to verify it.',
	OAuthCallbackError: 'Signing in at the provider was broken off. Try again, or use the link by mail.',
	EmailSignInError: 'The mail with the link could not be sent. Try again in a minute; if it stays, tell the person who runs this server.',
	Configuration: 'Signing in did not work, and it is not your doing. Try again; if it stays, tell the person who runs this server.'
};

export const load: PageServerLoad = async (event) => {
	const { locals, url } = event;
	const to = wayBack(url.searchParams.get('to'));
	if (locals.user) redirect(303, to);
	const code = url.searchParams.get('error');
	return {
		to,
		linkMinutes: LINK_MINUTES,
		trouble: code ? (TROUBLE[code] ?? 'Signing in did not work. Try again, or use the link by mail.') : null,
		provider: locals.settings.oidc?.name ?? null,
		demo: demoAllowedFor(event) ? await demoPeople(locals.db) : []
	};
};

/** Begins a sign-in; what goes wrong is said on the page, with what was typed still there. */
async function begin(event: RequestEvent, email: string) {
	try {
		await authOf(event.locals.db, event.locals.settings).signIn(event);
	} catch (thrown) {
		if (!(thrown instanceof AuthError)) throw thrown;
		if (thrown instanceof LinkNotSent) return fail(503, { email, message: TROUBLE.EmailSignInError });
		log.error({ err: thrown }, 'a sign-in could not begin');
		return fail(503, { email, message: 'The provider does not answer. Try again in a minute, or use the link by mail.' });
	}
}

const ADDRESS = z.email({ error: 'This is not an e-mail address. Check it for a missing @ or a space.' }).max(254, 'An e-mail address has at most 254 characters.');

export const actions: Actions = {
	mail: async (event) => {
		const form = await event.request.clone().formData();
		const typed = String(form.get('email') ?? '');
		const email = ADDRESS.safeParse(typed.trim());
		if (!email.success) return fail(400, { email: typed, message: email.error.issues[0].message });
		return begin(event, typed);
	},
	provider: (event) => begin(event, ''),
	demo: async (event) => {
		const { locals, request, cookies } = event;
		const to = await page(async () => {
			if (!demoAllowedFor(event)) throw notAllowed('One-click sign-in works only in demo mode and on this very machine. Sign in with a link by mail instead.');
			const form = await request.formData();
			const { token, expires } = await openDemoSession(locals.db, String(form.get('email') ?? ''));
			cookies.set(sessionCookieName(locals.settings), token, { path: '/', httpOnly: true, sameSite: 'lax', secure: isSecure(locals.settings), expires });
			return wayBack(String(form.get('redirectTo') ?? ''));
		});
		redirect(303, to);
	}
};
