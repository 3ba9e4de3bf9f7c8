import type { RequestHandler } from './$types';
import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { endpoint } from '$lib/server/http/endpoint';
import { studyBySlug } from '$lib/server/import/study';
import { studyBasis } from '$lib/server/results/load-sessions';
import { pairsDictionary } from '$lib/server/results/pairs-export';

/** What every column, tag and rule of the exported pairs means. */
export const GET: RequestHandler = endpoint(async ({ locals, params }) => {
	const actor = requireActor(locals);
	authorise(actor, 'pairs.export');
	const study = await studyBySlug(locals.db, actor, params.study);
	const text = pairsDictionary(await studyBasis(locals.db, actor, study.id), study);
	return new Response(text, {
		headers: {
			'content-type': 'text/csv; charset=utf-8',
			'content-disposition': `attachment; filename="${study.slug}-dictionary.csv"`,
			'cache-control': 'no-store'
		}
	});
});
