import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { studyList } from '$lib/server/study/list';
import { may } from '$lib/roles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) =>
	page(async () => {
		const actor = requireActor(locals);
		return { studies: await studyList(locals.db, actor), mayMake: may(actor.role, 'study.edit') };
	});
