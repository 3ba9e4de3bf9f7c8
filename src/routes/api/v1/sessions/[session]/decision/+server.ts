import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';
import { decideReview } from '$lib/server/review/decide';
import { sessionDocumentById } from '$lib/server/session/document';
import type { RequestEvent, RequestHandler } from './$types';

const Decision = z.object({ decision: z.enum(['approved', 'returned']), comment: z.string().max(4000).default('') });

/** Vouches for the session or hands it back, never on own work. Answers with the session as it stands then. */
export const POST: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.review');
	const sessionId = z.uuid().parse(params.session);
	const { decision, comment } = Decision.parse(await jsonBody(request));
	await decideReview(locals.db, actor, sessionId, decision, comment);
	return Response.json(await sessionDocumentById(locals.db, actor, sessionId));
});
