import type { RequestHandler } from './$types';
import { strToU8, zipSync } from 'fflate';
import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { endpoint } from '$lib/server/http/endpoint';
import { studyBySlug } from '$lib/server/import/study';
import { analysisFrom, pairsCsv, pairsDictionary } from '$lib/server/results/pairs-export';
import { includeFrom, studyPairs } from '$lib/server/results/study-pairs';

/** Pairs and their dictionary in one file, so that neither travels without the other. */
export const GET: RequestHandler = endpoint(async ({ locals, params, url }) => {
	const actor = requireActor(locals);
	authorise(actor, 'pairs.export');
	const study = await studyBySlug(locals.db, actor, params.study);
	const { pairs, basis } = await studyPairs(locals.db, actor, study.id, { include: includeFrom(url.searchParams.get('include')), code: url.searchParams.get('session') });
	const bytes = zipSync(
		{
			'pairs.csv': strToU8([...pairsCsv(pairs, analysisFrom(url.searchParams.get('analysis')))].join('')),
			'dictionary.csv': strToU8(pairsDictionary(basis, study))
		},
		{ level: 6 }
	);
	return new Response(new Uint8Array(bytes), {
		headers: {
			'content-type': 'application/zip',
			'content-disposition': `attachment; filename="${study.slug}-pairs.zip"`,
			'cache-control': 'no-store'
		}
	});
});
