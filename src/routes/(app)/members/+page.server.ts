import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import { requireActor } from '$lib/server/auth/require';
import type { Actor } from '$lib/server/auth/actor';
import { page } from '$lib/server/http/endpoint';
import { domainErrorOf } from '$lib/server/http/problem';
import { changeRole, invite, linkParticipant, peopleOf, removeMember } from '$lib/server/team/people';
import { may, ROLES } from '$lib/roles';
import type { Actions, PageServerLoad, RequestEvent } from './$types';

export const load: PageServerLoad = ({ locals }) =>
	page(async () => {
		const actor = requireActor(locals);
		return { ...(await peopleOf(locals.db, actor)), mine: actor.memberId, mayManage: may(actor.role, 'member.manage') };
	});

async function attempt(event: RequestEvent, done: string, work: (actor: Actor, form: FormData) => Promise<void>) {
	const actor = await page(() => requireActor(event.locals));
	try {
		await work(actor, await event.request.formData());
	} catch (thrown) {
		const known = domainErrorOf(thrown);
		if (!known) throw thrown;
		return fail(known.status, { message: known.sentence, done: null });
	}
	return { message: null, done };
}

const role = z.enum(ROLES, { error: 'Choose one of the roles.' });

export const actions: Actions = {
	invite: (event) =>
		attempt(event, 'The invitation is on its way.', async (actor, form) => {
			const input = z
				.object({ email: z.email({ error: 'This is not an e-mail address. Check it for a missing @ or a space.' }), role, initials: z.string() })
				.parse({ email: String(form.get('email') ?? '').trim(), role: form.get('role'), initials: String(form.get('initials') ?? '') });
			await invite(event.locals.db, event.locals.settings, actor, input);
		}),
	role: (event) => attempt(event, 'The role is changed.', (actor, form) => changeRole(event.locals.db, actor, String(form.get('member') ?? ''), role.parse(form.get('role')))),
	remove: (event) => attempt(event, 'The member has left. What was written stays.', (actor, form) => removeMember(event.locals.db, actor, String(form.get('member') ?? ''))),
	participant: (event) => attempt(event, 'The participant code is linked.', (actor, form) => linkParticipant(event.locals.db, actor, String(form.get('member') ?? ''), String(form.get('code') ?? '')))
};
