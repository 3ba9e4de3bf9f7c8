import { LINK_MINUTES } from '$lib/server/auth/auth';
import { demoAllowedFor } from '$lib/server/auth/demo';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) => ({ linkMinutes: LINK_MINUTES, demo: demoAllowedFor(event) });
