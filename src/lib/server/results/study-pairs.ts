/** Which sessions' pairs go into a study's figures and its export: one choice, made in one place. */
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { invalid } from '../errors';
import { loadSessions, studyBasis, type LoadedSession, type StudyBasis } from './load-sessions';
import { sessionPairs, type WearablePairs } from './session-pairs';

/** `reviewed`: only sessions that had their second look. `aligned`: every session whose clocks stand. */
export const INCLUDES = ['reviewed', 'aligned'] as const;
export type Include = (typeof INCLUDES)[number];

export function includeFrom(value: string | null): Include {
	if (value === null || value === '') return 'reviewed';
	const found = INCLUDES.find((i) => i === value);
	if (!found) throw invalid(`"${value}" is no choice of sessions. Use include=reviewed or include=aligned.`);
	return found;
}

export interface StudyPairs {
	basis: StudyBasis;
	/** All sessions that the actor sees, whatever is included. */
	sessions: LoadedSession[];
	pairs: WearablePairs[];
}

/** Pairs of the included sessions, in the order of sessions and devices. */
export async function studyPairs(
	db: Queryable,
	actor: Actor,
	studyId: string,
	choice: { include: Include; activity?: string | null; participant?: string | null; code?: string | null }
): Promise<StudyPairs> {
	const basis = await studyBasis(db, actor, studyId);
	const sessions = await loadSessions(db, actor, studyId);
	const pairs = sessions
		.filter(
			(s) =>
				(choice.include === 'aligned' || s.state === 'reviewed') &&
				(!choice.activity || s.activity === choice.activity) &&
				(!choice.participant || s.participantCode === choice.participant) &&
				(!choice.code || s.code === choice.code)
		)
		.flatMap((s) => sessionPairs(s, basis));
	return { basis, sessions, pairs };
}
