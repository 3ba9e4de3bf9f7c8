/** Who is asking: every query and command takes the actor first and is scoped to the actor's team. */
import { may, ownSessionsOnly, type Act, type Role } from '../../roles';
import { notAllowed } from '../errors';

export interface Actor {
	userId: string;
	memberId: string;
	teamId: string;
	teamSlug: string;
	teamName: string;
	role: Role;
	initials: string;
}

const SENTENCE: Partial<Record<Act, string>> = {
	'session.annotate': 'Your role reads this session but does not change it. Ask an owner for the analyst role.',
	'session.align': 'Your role reads offsets but does not move them. Ask an owner for the analyst role.',
	'session.review': 'Vouching and handing back is for reviewers. Ask an owner for that role.',
	'recording.upload': 'Your role does not upload recordings. Ask an owner for the contributor or analyst role.',
	'member.manage': 'Only an owner changes who is in the team.'
};

/** Refuses, with a sentence, what the actor's role may not do. Called first by every route. */
export function authorise(actor: Actor, act: Act): void {
	if (!may(actor.role, act)) {
		throw notAllowed(SENTENCE[act] ?? `The role ${actor.role} does not include this. Ask an owner of ${actor.teamName}.`);
	}
}

export const seesOwnSessionsOnly = (actor: Actor) => ownSessionsOnly(actor.role);
