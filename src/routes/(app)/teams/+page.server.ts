import { fail, redirect } from '@sveltejs/kit';
import { DomainError } from '$lib/server/errors';
import { page } from '$lib/server/http/endpoint';
import { domainErrorOf } from '$lib/server/http/problem';
import { TEAM_COOKIE, type SignedInUser } from '$lib/server/auth/membership';
import { acceptInvitation, createTeam, openInvitations } from '$lib/server/team/team';
import type { Actions, PageServerLoad, RequestEvent } from './$types';

function requireUser(locals: App.Locals): SignedInUser {
	if (!locals.user) throw new DomainError('signed-out', 'Sign in first.');
	return locals.user;
}

export const load: PageServerLoad = ({ locals }) => page(async () => ({ invitations: await openInvitations(locals.db, requireUser(locals)) }));

const openTeam = ({ cookies, locals }: RequestEvent, slug: string) =>
	cookies.set(TEAM_COOKIE, slug, { path: '/', httpOnly: true, sameSite: 'lax', secure: locals.settings.origin.startsWith('https:'), maxAge: 31_536_000 });

async function attempt(event: RequestEvent, work: (user: SignedInUser, form: FormData) => Promise<{ slug: string }>) {
	const user = await page(() => requireUser(event.locals));
	try {
		openTeam(event, (await work(user, await event.request.formData())).slug);
	} catch (thrown) {
		const known = domainErrorOf(thrown);
		if (!known) throw thrown;
		return fail(known.status, { message: known.sentence });
	}
	redirect(303, '/studies');
}

export const actions: Actions = {
	make: (event) => attempt(event, (user, form) => createTeam(event.locals.db, user, { name: String(form.get('name') ?? ''), initials: String(form.get('initials') ?? '') })),
	accept: (event) => attempt(event, (user, form) => acceptInvitation(event.locals.db, user, String(form.get('invitation') ?? ''))),
	open: (event) =>
		attempt(event, async (_user, form) => {
			const slug = String(form.get('team') ?? '');
			if (!event.locals.memberships.some((m) => m.teamSlug === slug)) throw new DomainError('not-found', 'You are not in this team.');
			return { slug };
		})
};
