import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { page } from '$lib/server/http/endpoint';
import { agreementPage } from '$lib/server/results/agreement-page';
import { includeFrom } from '$lib/server/results/study-pairs';
import { may } from '$lib/roles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, parent, url }) => {
	const { study, devices } = await parent();
	return page(async () => {
		const actor = requireActor(locals);
		authorise(actor, 'agreement.read');
		const filter = {
			include: includeFrom(url.searchParams.get('include')),
			activity: url.searchParams.get('activity'),
			participant: url.searchParams.get('participant')
		};
		return {
			...(await agreementPage(locals.db, actor, study, devices, filter, url.searchParams.get('device'))),
			filter,
			may: { export: may(actor.role, 'pairs.export') }
		};
	});
};
