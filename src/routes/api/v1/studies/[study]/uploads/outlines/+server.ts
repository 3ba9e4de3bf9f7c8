import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { endpoint } from '$lib/server/http/endpoint';
import { outlinesOf } from '$lib/server/import/outlines';
import { studyBySlug } from '$lib/server/import/study';
import type { RequestHandler } from './$types';

const Ids = z.array(z.uuid()).max(200);

/** Thin heart-rate lines: `?recordings=<id>,<id>,…`. A recording's line never changes. */
export const GET: RequestHandler = endpoint(async ({ locals, params, url }) => {
	const actor = requireActor(locals);
	authorise(actor, 'recording.upload');
	const study = await studyBySlug(locals.db, actor, params.study);
	const ids = Ids.parse((url.searchParams.get('recordings') ?? '').split(',').filter(Boolean));
	return json(await outlinesOf(locals.db, actor, study.id, ids), { headers: { 'cache-control': 'private, max-age=3600' } });
});
