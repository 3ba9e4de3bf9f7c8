import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { sessionAgreement } from '$lib/server/session/agreement';
import type { RequestEvent, RequestHandler } from './$types';

/** Agreement figures of the session per wearable, primary and cleaned, from what is stored. */
export const GET: RequestHandler = endpoint(async ({ locals, params }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'agreement.read');
	return Response.json(await sessionAgreement(locals.db, actor, z.uuid().parse(params.session)), { headers: { 'cache-control': 'private, no-store' } });
});
