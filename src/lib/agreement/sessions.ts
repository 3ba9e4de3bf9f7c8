/** Pairs by session, and sessions by person: the units that are independent, where seconds are not. */
import { emptySums, mergeMoments, mergeSums, sumPairs, type PairMoments, type PairSums } from './sums';

/** The pairs of one session in one analysis. */
export interface PairGroup {
	session: string;
	/** Who wore the device; leave out where it is not known. */
	participant?: string;
	/** bpm, same length, finite. */
	reference: Float64Array;
	wearable: Float64Array;
	/** For coverage: seconds at which the reference is sound, and those of them with a wearable value. */
	soundReferenceS?: number;
	pairedS?: number;
}

/** One session's sufficient statistics: what a study keeps so that one changed tag recomputes one session. */
export interface SessionSums {
	session: string;
	participant: string | null;
	sums: PairSums;
	soundReferenceS: number | null;
	pairedS: number | null;
}

/** Which unit is resampled and counted as independent. */
export type ClusterLevel = 'participant' | 'session';

/** @throws InvalidInput when the lengths differ or a value is not finite */
export function sumSession(group: PairGroup): SessionSums {
	return {
		session: group.session,
		participant: group.participant ?? null,
		sums: sumPairs(group.reference, group.wearable),
		soundReferenceS: group.soundReferenceS ?? null,
		pairedS: group.pairedS ?? null
	};
}

/**
 * Sessions with pairs, one record each, in order of first appearance. A session given in parts is put together; the
 * same session code under two people is two sessions.
 */
export function joinSessions(parts: readonly SessionSums[]): SessionSums[] {
	const bySession = new Map<string, SessionSums[]>();
	for (const part of parts) {
		const key = JSON.stringify([part.participant, part.session]);
		const same = bySession.get(key);
		if (same) same.push(part);
		else bySession.set(key, [part]);
	}
	return [...bySession.values()].map((same) =>
		same.length === 1
			? same[0]
			: {
					session: same[0].session,
					participant: same[0].participant,
					sums: mergeSums(same.map((s) => s.sums)),
					soundReferenceS: totalOrNull(same.map((s) => s.soundReferenceS)),
					pairedS: totalOrNull(same.map((s) => s.pairedS))
				}
	);
}

/** Moments of every independent unit that has pairs. By participant, a session without one stands for itself. */
export function clusterMoments(sessions: readonly SessionSums[], level: ClusterLevel): PairMoments[] {
	const withPairs = sessions.filter((s) => s.sums.n > 0);
	if (level === 'session') return withPairs.map((s) => s.sums);
	return sessionsByParticipant(withPairs).map((group) => mergeMoments(group.map((s) => s.sums)));
}

/** Sessions of each participant; a session without one is a group of its own. */
export function sessionsByParticipant(sessions: readonly SessionSums[]): SessionSums[][] {
	const groups = new Map<string, SessionSums[]>();
	for (const s of sessions) {
		const key = s.participant === null ? JSON.stringify([s.session]) : s.participant;
		const group = groups.get(key);
		if (group) group.push(s);
		else groups.set(key, [s]);
	}
	return [...groups.values()];
}

/** All sessions' pairs together. */
export function wholeOf(sessions: readonly SessionSums[]): PairSums {
	return sessions.length ? mergeSums(sessions.map((s) => s.sums)) : emptySums();
}

/** The total, or null when one part is not known. */
function totalOrNull(parts: readonly (number | null)[]): number | null {
	let total = 0;
	for (const part of parts) {
		if (part === null) return null;
		total += part;
	}
	return total;
}

/** Share of the reference's sound time with a wearable value over all sessions; null when a session's is not known. */
export function totalCoverage(sessions: readonly SessionSums[]): number | null {
	const soundS = totalOrNull(sessions.map((s) => s.soundReferenceS));
	const pairedS = totalOrNull(sessions.map((s) => s.pairedS));
	return soundS === null || pairedS === null || soundS === 0 ? null : pairedS / soundS;
}
