import type { Handle, HandleServerError, ServerInit } from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { building } from '$app/environment';
import { AUTH_PATH, authOf } from '$lib/server/auth/auth';
import { userOfSession } from '$lib/server/auth/session-user';
import { actorFrom, membershipsOf, TEAM_COOKIE } from '$lib/server/auth/membership';
import { openDatabase, type OpenDatabase } from '$lib/server/db/client';
import { log } from '$lib/server/http/log';
import { domainErrorOf, FAULT_SENTENCE } from '$lib/server/http/problem';
import { startWorker } from '$lib/server/jobs/worker';
import { settings } from '$lib/server/settings';

let database: OpenDatabase | null = null;

export const init: ServerInit = async () => {
	if (building) return;
	database = openDatabase(settings().databaseUrl);
	const worker = await startWorker({ databaseUrl: settings().databaseUrl, onError: (what, cause) => log.error({ err: cause }, what) });
	process.once('sveltekit:shutdown', async () => {
		await worker.stop();
		await database?.close();
	});
};

const withDatabase: Handle = ({ event, resolve }) => {
	if (!database) throw new Error('The database is not open.');
	event.locals.db = database.db;
	event.locals.settings = settings();
	event.locals.user = null;
	event.locals.actor = null;
	event.locals.memberships = [];
	return resolve(event);
};

const withAuth: Handle = ({ event, resolve }) => {
	if (!event.url.pathname.startsWith(`${AUTH_PATH}/`)) return resolve(event);
	return authOf(event.locals.db, event.locals.settings).answer(event);
};

const withActor: Handle = async ({ event, resolve }) => {
	const { locals, cookies } = event;
	locals.user = await userOfSession(locals.db, cookies, locals.settings);
	if (locals.user) {
		locals.memberships = await membershipsOf(locals.db, locals.user.id);
		locals.actor = actorFrom(locals.user.id, locals.memberships, cookies.get(TEAM_COOKIE));
	}
	const theme = locals.user?.theme ?? cookies.get('nonius-theme') ?? 'system';
	const response = await resolve(event, {
		transformPageChunk: ({ html }) => html.replace('%nonius.theme%', ['light', 'dark'].includes(theme) ? theme : 'system')
	});
	response.headers.set('x-content-type-options', 'nosniff');
	response.headers.set('referrer-policy', 'same-origin');
	response.headers.set('x-frame-options', 'DENY');
	// What a signed-in person saw is asked for again after signing out.
	if (locals.user && !response.headers.has('cache-control')) response.headers.set('cache-control', 'private, no-cache');
	return response;
};

export const handle = sequence(withDatabase, withAuth, withActor);

export const handleError: HandleServerError = ({ error, event, status, message }) => {
	const known = domainErrorOf(error);
	if (known) return { message: known.sentence };
	if (status !== 404) log.error({ err: error, method: event.request.method, path: event.url.pathname }, 'a request failed');
	return {
		message:
			status === 404
				? 'There is nothing at this address. Check it, or go back to your studies.'
				: status < 500
					? message
					: FAULT_SENTENCE
	};
};

