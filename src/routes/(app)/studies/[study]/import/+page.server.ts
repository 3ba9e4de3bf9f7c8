import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { importBoard } from '$lib/server/import/board';
import { studyBySlug } from '$lib/server/import/study';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, params }) =>
	page(async () => {
		const actor = requireActor(locals);
		authorise(actor, 'recording.upload');
		const study = await studyBySlug(locals.db, actor, params.study);
		return { slug: study.slug, title: study.title, largestBytes: locals.settings.maxUploadBytes, board: await importBoard(locals.db, actor, study.id) };
	});
