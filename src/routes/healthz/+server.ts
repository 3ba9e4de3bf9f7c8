import { sql } from 'drizzle-orm';
import type { RequestHandler } from './$types';

/** Does the server answer, and does its database? */
export const GET: RequestHandler = async ({ locals }) => {
	await locals.db.execute(sql`select 1`);
	return new Response('ok\n', { headers: { 'content-type': 'text/plain', 'cache-control': 'no-store' } });
};
