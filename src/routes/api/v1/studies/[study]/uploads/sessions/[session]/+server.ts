import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { jsonBody } from '$lib/server/http/json-body';
import { endpoint } from '$lib/server/http/endpoint';
import { describeSession } from '$lib/server/import/answers';
import { studyBySlug } from '$lib/server/import/study';
import type { RequestHandler } from './$types';

const Description = z.object({
	participantId: z.uuid().nullable().optional(),
	participantCode: z.string().trim().min(1).max(16).optional(),
	activity: z.string().min(1).nullable().optional()
});

/** Says who wore the devices and what was done. */
export const PATCH: RequestHandler = endpoint(async ({ locals, params, request }) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.sort');
	const study = await studyBySlug(locals.db, actor, params.study);
	await describeSession(locals.db, actor, study.id, z.uuid().parse(params.session), Description.parse(await jsonBody(request)));
	return new Response(null, { status: 204 });
});
