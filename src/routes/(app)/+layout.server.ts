import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { redirect } from '@sveltejs/kit';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = async ({ locals, url }) => {
	if (!locals.user) redirect(303, `/signin?to=${encodeURIComponent(url.pathname + url.search)}`);
	// Without a team there is one place to be: where teams are made and invitations accepted.
	if (!locals.actor && !url.pathname.startsWith('/teams')) redirect(303, '/teams');
	return page(() => ({
		me: { email: locals.user!.email, name: locals.user!.name, theme: locals.user!.theme, ...(locals.actor ? { initials: requireActor(locals).initials, role: requireActor(locals).role } : { initials: '', role: null }) },
		team: locals.actor ? { name: locals.actor.teamName, slug: locals.actor.teamSlug } : null,
		teams: locals.memberships.map((m) => ({ name: m.teamName, slug: m.teamSlug }))
	}));
};
