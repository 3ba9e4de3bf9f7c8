import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { reviewQueue } from '$lib/server/review/queue';
import { may } from '$lib/roles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, parent }) => {
	const { study } = await parent();
	return page(async () => {
		const actor = requireActor(locals);
		authorise(actor, 'session.read');
		return { queue: await reviewQueue(locals.db, actor, study.id), decides: may(actor.role, 'session.review') };
	});
};
