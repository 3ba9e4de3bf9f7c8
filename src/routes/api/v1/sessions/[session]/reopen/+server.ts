import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';
import { reopenSession } from '$lib/server/review/hand-in';
import { sessionDocumentById } from '$lib/server/session/document';
import type { RequestEvent, RequestHandler } from './$types';

const Reopening = z.object({ reason: z.string().max(4000) });

/** Opens a reviewed session again, with a reason. Answers with the session as it stands then. */
export const POST: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.submit');
	const sessionId = z.uuid().parse(params.session);
	const { reason } = Reopening.parse(await jsonBody(request));
	await reopenSession(locals.db, actor, sessionId, reason);
	return Response.json(await sessionDocumentById(locals.db, actor, sessionId));
});
