import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { placementEnum } from '$lib/server/db/schema';
import { jsonBody } from '$lib/server/http/json-body';
import { endpoint } from '$lib/server/http/endpoint';
import { addDevice } from '$lib/server/import/add-device';
import { studyBySlug } from '$lib/server/import/study';
import type { RequestHandler } from './$types';

const Device = z.object({
	name: z.string().trim().min(1).max(80),
	shortName: z.string().trim().max(20).optional(),
	role: z.enum(['reference', 'wearable']),
	placement: z.enum(placementEnum.enumValues)
});

/** Adds a device to the study, under the next free number. */
export const POST: RequestHandler = endpoint(async ({ locals, params, request }) => {
	const actor = requireActor(locals);
	authorise(actor, 'study.edit');
	const study = await studyBySlug(locals.db, actor, params.study);
	return json({ deviceModelId: await addDevice(locals.db, actor, study.id, Device.parse(await jsonBody(request))) }, { status: 201 });
});
