/** Wrappers that every route uses: domain errors become problem+json for programs and pages for people. */
import { error, isHttpError, isRedirect, redirect, type RequestEvent } from '@sveltejs/kit';
import { log } from './log';
import { domainErrorOf, faultResponse, problemResponse } from './problem';

/** An API handler whose errors, the sender's and our own, are answered as problem+json. */
export function endpoint<Event extends RequestEvent>(handler: (event: Event) => Response | Promise<Response>) {
	return async (event: Event): Promise<Response> => {
		try {
			return await handler(event);
		} catch (thrown) {
			const known = domainErrorOf(thrown);
			if (known) return problemResponse(known);
			if (isHttpError(thrown) || isRedirect(thrown)) throw thrown;
			log.error({ err: thrown, method: event.request.method, path: event.url.pathname }, 'a request failed');
			return faultResponse();
		}
	};
}

/** A load function's or action's work: a domain error becomes an error page, signed out leads to sign-in. */
export async function page<T>(work: () => T | Promise<T>): Promise<T> {
	try {
		return await work();
	} catch (thrown) {
		const known = domainErrorOf(thrown);
		if (!known) throw thrown;
		if (known.kind === 'signed-out') redirect(303, '/signin');
		if (known.detail.needsTeam) redirect(303, '/teams');
		error(known.status, { message: known.sentence });
	}
}
