import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { page } from '$lib/server/http/endpoint';
import { studyOverview } from '$lib/server/results/study-overview';
import { may } from '$lib/roles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, parent }) => {
	const { study, devices } = await parent();
	return page(async () => {
		const actor = requireActor(locals);
		authorise(actor, 'session.read');
		return {
			...(await studyOverview(locals.db, actor, study, devices)),
			activities: study.activities,
			may: { upload: may(actor.role, 'recording.upload') }
		};
	});
};
