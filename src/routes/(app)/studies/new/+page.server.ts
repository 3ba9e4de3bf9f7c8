import { fail, redirect } from '@sveltejs/kit';
import { requireActor } from '$lib/server/auth/require';
import { authorise } from '$lib/server/auth/actor';
import { page } from '$lib/server/http/endpoint';
import { domainErrorOf } from '$lib/server/http/problem';
import { createStudy, PLACEMENTS } from '$lib/server/study/create';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) =>
	page(() => {
		authorise(requireActor(locals), 'study.edit');
		return { placements: [...PLACEMENTS] };
	});

export const actions: Actions = {
	default: async ({ locals, request }) => {
		const actor = await page(() => requireActor(locals));
		const form = await request.formData();
		const text = (name: string) => String(form.get(name) ?? '');
		const device = (prefix: string) => ({ name: text(`${prefix}-name`), shortName: text(`${prefix}-short`), placement: text(`${prefix}-placement`) });
		const wearables = [1, 2, 3, 4, 5, 6].map((n) => device(`w${n}`)).filter((w) => w.name.trim() !== '');
		const values = { title: text('title'), question: text('question'), activities: text('activities') };
		let slug: string;
		try {
			const made = await createStudy(locals.db, actor, {
				title: values.title,
				question: values.question,
				activities: values.activities.split('\n').map((a) => a.trim()).filter(Boolean),
				reference: device('ref'),
				wearables
			});
			slug = made.slug;
		} catch (thrown) {
			const known = domainErrorOf(thrown);
			if (!known) throw thrown;
			return fail(known.status, { ...values, message: known.sentence });
		}
		redirect(303, `/studies/${slug}/import`);
	}
};
