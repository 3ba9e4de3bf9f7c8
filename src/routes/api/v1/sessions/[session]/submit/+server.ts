import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';
import { submitSession } from '$lib/server/review/hand-in';
import { sessionDocumentById } from '$lib/server/session/document';
import type { RequestEvent, RequestHandler } from './$types';

const HandIn = z.object({ note: z.string().max(4000).default('') });

/** Hands the session to review. Answers with the session as it stands then. */
export const POST: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.submit');
	const sessionId = z.uuid().parse(params.session);
	const { note } = HandIn.parse(await jsonBody(request));
	await submitSession(locals.db, actor, sessionId, note);
	return Response.json(await sessionDocumentById(locals.db, actor, sessionId));
});
