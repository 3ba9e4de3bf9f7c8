/** The signed-in member, or a refusal that leads to the sign-in page. */
import { DomainError } from '../errors';
import type { Actor } from './actor';

export function requireActor(locals: { actor: Actor | null; user: { id: string } | null }): Actor {
	if (locals.actor) return locals.actor;
	if (locals.user) throw new DomainError('not-allowed', 'You belong to no team yet. Accept an invitation or make a team first.', { needsTeam: true });
	throw new DomainError('signed-out', 'Sign in first.');
}
