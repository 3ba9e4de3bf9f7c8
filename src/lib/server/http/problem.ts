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

export function problemResponse(error: DomainError): Response {
	return new Response(
		JSON.stringify({ type: 'about:blank', title: error.kind, status: error.status, detail: error.sentence, ...error.detail }),
		{ status: error.status, headers: { 'content-type': 'application/problem+json', 'cache-control': 'no-store' } }
	);
}
