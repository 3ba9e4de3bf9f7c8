import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { sessionDocumentById } from '$lib/server/session/document';
import type { RequestEvent, RequestHandler } from './$types';

/** The session as the timeline needs it, without its samples. */
export const GET: RequestHandler = endpoint(async ({ locals, params }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.read');
	return Response.json(await sessionDocumentById(locals.db, actor, z.uuid().parse(params.session)), { headers: { 'cache-control': 'private, no-store' } });
});
