import { demoAllowed } from '$lib/server/auth/demo';
import { notFound } from '$lib/server/errors';
import { page } from '$lib/server/http/endpoint';
import { listCaughtMails } from '$lib/server/mail/caught';
import type { PageServerLoad } from './$types';

/** Mails that the local catcher kept: in demo mode, from this machine only, since they hold sign-in links. */
export const load: PageServerLoad = ({ locals, request, getClientAddress }) =>
	page(async () => {
		const { dataFolder } = locals.settings;
		if (dataFolder === null || !demoAllowed(locals.settings, getClientAddress(), request.headers)) throw notFound('This page');
		return { mails: await listCaughtMails(dataFolder) };
	});
