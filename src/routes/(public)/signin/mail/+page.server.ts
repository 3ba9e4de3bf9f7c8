import { demoAllowed } from '$lib/server/auth/demo';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, request, getClientAddress }) => ({ demo: demoAllowed(locals.settings, getClientAddress(), request.headers) });
