import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { takeBack } from '$lib/server/review/hand-in';
import { sessionDocumentById } from '$lib/server/session/document';
import type { RequestEvent, RequestHandler } from './$types';

/** Takes the session back from review before anybody has decided. Answers with the session as it stands then. */
export const POST: RequestHandler = endpoint(async ({ locals, params }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.submit');
	const sessionId = z.uuid().parse(params.session);
	await takeBack(locals.db, actor, sessionId);
	return Response.json(await sessionDocumentById(locals.db, actor, sessionId));
});
