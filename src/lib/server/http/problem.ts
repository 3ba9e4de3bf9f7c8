/** Domain errors as problem+json (RFC 9457): the one place where errors become answers for programs. */
import { ZodError } from 'zod';
import { DomainError, invalid } from '../errors';

/** A domain error for anything thrown that is the sender's doing; null for our own faults. */
export function domainErrorOf(thrown: unknown): DomainError | null {
	if (thrown instanceof DomainError) return thrown;
	if (thrown instanceof ZodError) {
		const first = thrown.issues[0];
		// A schema's own sentence stands alone; the library's needs its place.
		const own = /[.!?]$/.test(first.message);
		const sentence = own ? first.message : `The request is not as it should be. ${first.path.length > 0 ? `${first.path.join('.')}: ` : ''}${first.message}.`;
		return invalid(sentence, { issues: thrown.issues.map((i) => ({ path: i.path.join('.'), message: i.message })) });
	}
	return null;
}

/** What is said when the fault is ours: nothing of what went wrong inside, and what is safe. */
export const FAULT_SENTENCE = 'Something went wrong on our side. What you had saved is safe; try again, and tell an owner if it stays.';

/** RFC 9457 leaves `title` to the type; without a type of its own it is the status in words. */
const TITLE: Record<number, string> = {
	400: 'Bad Request',
	401: 'Unauthorized',
	403: 'Forbidden',
	404: 'Not Found',
	409: 'Conflict',
	422: 'Unprocessable Content',
	500: 'Internal Server Error',
	503: 'Service Unavailable'
};

function problem(status: number, detail: string, more: Record<string, unknown> = {}): Response {
	return new Response(JSON.stringify({ ...more, type: 'about:blank', title: TITLE[status], status, detail }), {
		status,
		headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store' }
	});
}

/** `code` is the kind of the error, for programs; further fields are the error's own. */
export function problemResponse(error: DomainError): Response {
	return problem(error.status, error.sentence, { code: error.kind, ...error.detail });
}

export function faultResponse(): Response {
	return problem(500, FAULT_SENTENCE, { code: 'fault' });
}
