import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { page } from '$lib/server/http/endpoint';
import { studyHead } from '$lib/server/study/study';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = ({ locals, params }) =>
	page(() => {
		const actor = requireActor(locals);
		authorise(actor, 'study.read');
		return studyHead(locals.db, actor, params.study);
	});
