import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { page } from '$lib/server/http/endpoint';
import { sessionDocument } from '$lib/server/session/document';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, params }) =>
	page(async () => {
		const actor = requireActor(locals);
		authorise(actor, 'session.read');
		return { document: await sessionDocument(locals.db, actor, params.study, params.session) };
	});
