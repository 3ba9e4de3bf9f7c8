import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';
import { saveTag, TagToSave } from '$lib/server/session/tag';
import type { RequestEvent, RequestHandler } from './$types';

const Edit = TagToSave.extend({ baseVersion: z.int().min(0) });

/** Makes a tag under an id of the sender's, or appends a version of it; 409 with `theirs` when another version stands on top of the base. */
export const PUT: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.annotate');
	const { baseVersion, ...wanted } = Edit.parse(await jsonBody(request));
	return Response.json(await saveTag(locals.db, actor, z.uuid().parse(params.session), z.uuid().parse(params.tag), baseVersion, wanted));
});
