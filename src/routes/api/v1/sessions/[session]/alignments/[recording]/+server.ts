import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { jsonBody } from '$lib/server/http/json-body';
import { sessionOfRecording } from '$lib/server/session/access';
import { AlignmentToSave, saveAlignment } from '$lib/server/session/alignment';
import type { RequestEvent, RequestHandler } from './$types';

const Edit = AlignmentToSave.extend({ baseVersion: z.int().min(0) });

/** Appends a version of a wearable's offset; 409 with `theirs` when another version stands on top of the base. */
export const PUT: RequestHandler = endpoint(async ({ locals, params, request }: RequestEvent) => {
	const actor = requireActor(locals);
	authorise(actor, 'session.align');
	const recordingId = z.uuid().parse(params.recording);
	await sessionOfRecording(locals.db, actor, z.uuid().parse(params.session), recordingId);
	const { baseVersion, ...wanted } = Edit.parse(await jsonBody(request));
	return Response.json(await saveAlignment(locals.db, actor, recordingId, baseVersion, wanted));
});
