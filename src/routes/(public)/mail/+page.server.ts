import { demoAllowedFor } from '$lib/server/auth/demo';
import { notFound } from '$lib/server/errors';
import { page } from '$lib/server/http/endpoint';
import { listCaughtMails } from '$lib/server/mail/caught';
import type { PageServerLoad } from './$types';

/** Mails that the local catcher kept: in demo mode, from this machine only, since they hold sign-in links. */
export const load: PageServerLoad = (event) =>
	page(async () => {
		const { dataFolder } = event.locals.settings;
		if (dataFolder === null || !demoAllowedFor(event)) throw notFound('This page');
		return { mails: await listCaughtMails(dataFolder) };
	});
