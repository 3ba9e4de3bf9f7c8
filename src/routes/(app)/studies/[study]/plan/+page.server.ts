import { fail } from '@sveltejs/kit';
import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { domainErrorOf } from '$lib/server/http/problem';
import { studyBasis } from '$lib/server/results/load-sessions';
import { amendPlan, planVersions } from '$lib/server/study/plans';
import { studyHead } from '$lib/server/study/study';
import { GRIDS_S, treatmentOf, type Treatment } from '$lib/agreement/plan';
import { may } from '$lib/roles';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, parent }) => {
	const { study } = await parent();
	return page(async () => {
		const actor = requireActor(locals);
		const basis = await studyBasis(locals.db, actor, study.id);
		return { ...basis, versions: await planVersions(locals.db, actor, study.id), grids: ['per-sample', ...GRIDS_S].map(String), mayEdit: may(actor.role, 'plan.edit') };
	});
};

export const actions: Actions = {
	default: async ({ locals, request, params }) => {
		const actor = await page(() => requireActor(locals));
		try {
			const { study } = await studyHead(locals.db, actor, params.study);
			const basis = await studyBasis(locals.db, actor, study.id);
			const form = await request.formData();
			const text = (name: string) => String(form.get(name) ?? '');
			const treatments: Record<string, Treatment> = {};
			for (const kind of basis.kinds) {
				const now = treatmentOf(basis.plan, kind);
				treatments[kind.key] = { primary: now.primary, cleaned: now.primary === 'out' || form.get(`out-${kind.key}`) !== null ? 'out' : 'in' };
			}
			const grid = text('grid');
			const version = await amendPlan(
				locals.db,
				actor,
				study.id,
				Number(text('base')),
				{
					...basis.plan,
					gridS: grid === 'per-sample' ? grid : Number(grid),
					pairing: text('method') === 'nearest' ? { method: 'nearest', toleranceS: Number(text('seconds')) } : { method: 'interpolate', maxGapS: Number(text('seconds')) },
					minSessions: Number(text('minSessions')),
					minParticipants: Number(text('minParticipants')),
					smallestDifferenceBpm: Number(text('smallestDifferenceBpm')),
					minCoveragePct: Number(text('minCoveragePct')),
					treatments
				},
				text('reason'),
				basis.kinds
			);
			return { saved: version, message: null };
		} catch (thrown) {
			const known = domainErrorOf(thrown);
			if (!known) throw thrown;
			return fail(known.status, { saved: null, message: known.sentence });
		}
	}
};
