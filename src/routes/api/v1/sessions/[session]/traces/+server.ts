import { z } from 'zod';
import { encodeTraceColumns, TRACE_COLUMNS_TYPE } from '$lib/timeline/trace-columns';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { sessionTraces, tracesTag } from '$lib/server/session/traces';
import type { RequestEvent, RequestHandler } from './$types';

/** The samples of the session as binary columns. They are kept by the browser and asked for again only when they changed. */
export const GET: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.read');
	const sessionId = z.uuid().parse(params.session);
	// Kept by this person's browser alone, and asked for at every use: rights may have gone in the meantime.
	const headers = { etag: await tracesTag(locals.db, actor, sessionId), 'cache-control': 'private, no-cache', vary: 'cookie' };
	if (request.headers.get('if-none-match') === headers.etag) return new Response(null, { status: 304, headers });
	return new Response(encodeTraceColumns(await sessionTraces(locals.db, actor, sessionId)), { headers: { ...headers, 'content-type': TRACE_COLUMNS_TYPE } });
});
