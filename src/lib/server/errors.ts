/**
 * The closed set of domain errors. Each carries a sentence for the user; one place turns them into pages,
 * problem+json (RFC 9457) and exit codes. An expected outcome ("not determinable") is a value, not an error.
 */
export type DomainErrorKind = 'not-found' | 'not-allowed' | 'conflict' | 'unreadable' | 'invalid' | 'signed-out' | 'unavailable';

export const STATUS_OF: Record<DomainErrorKind, number> = {
	'not-found': 404,
	'not-allowed': 403,
	conflict: 409,
	unreadable: 422,
	invalid: 400,
	'signed-out': 401,
	/** Something that this server needs (mail, a provider) does not answer. */
	unavailable: 503
};

export class DomainError extends Error {
	constructor(
		readonly kind: DomainErrorKind,
		/** What is wrong, where, and what to do: shown to the user as it stands. */
		readonly sentence: string,
		/** Further fields for programs (a conflict carries both versions). */
		readonly detail: Record<string, unknown> = {},
		options?: { cause?: unknown }
	) {
		super(sentence, options);
		this.name = 'DomainError';
	}
	get status(): number {
		return STATUS_OF[this.kind];
	}
}

export const notFound = (what: string) =>
	new DomainError('not-found', `${what} is not here, or is not your team's. Check the address or go back to your studies.`);
export const notAllowed = (sentence: string) => new DomainError('not-allowed', sentence);
export const conflict = (sentence: string, detail: Record<string, unknown> = {}) => new DomainError('conflict', sentence, detail);
export const invalid = (sentence: string, detail: Record<string, unknown> = {}) => new DomainError('invalid', sentence, detail);
export const unavailable = (sentence: string, cause: unknown) => new DomainError('unavailable', sentence, {}, { cause });
