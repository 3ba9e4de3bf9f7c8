import type { RequestHandler } from './$types';
import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { endpoint } from '$lib/server/http/endpoint';
import { studyBySlug } from '$lib/server/import/study';
import { analysisFrom, pairsCsv } from '$lib/server/results/pairs-export';
import { includeFrom, studyPairs } from '$lib/server/results/study-pairs';

/** Aligned pairs as CSV. `include` = reviewed | aligned, `analysis` = all | primary | cleaned, `session` = one code. */
export const GET: RequestHandler = endpoint(async ({ locals, params, url }) => {
	const actor = requireActor(locals);
	authorise(actor, 'pairs.export');
	const study = await studyBySlug(locals.db, actor, params.study);
	const analysis = analysisFrom(url.searchParams.get('analysis'));
	const { pairs } = await studyPairs(locals.db, actor, study.id, { include: includeFrom(url.searchParams.get('include')), code: url.searchParams.get('session') });
	const rows = pairsCsv(pairs, analysis);
	const encoder = new TextEncoder();
	const body = new ReadableStream<Uint8Array>({
		pull(controller) {
			const next = rows.next();
			if (next.done) controller.close();
			else controller.enqueue(encoder.encode(next.value));
		}
	});
	return new Response(body, {
		headers: {
			'content-type': 'text/csv; charset=utf-8',
			'content-disposition': `attachment; filename="${study.slug}-pairs.csv"`,
			'cache-control': 'no-store'
		}
	});
});
