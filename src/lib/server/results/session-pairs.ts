/**
 * Pairs of loaded sessions through the one engine, remembered per session: after one tag changes, only that session
 * is paired again.
 */
import type { PairTable } from '../../agreement/pair-table';
import { pairTraces } from '../../agreement/pairing';
import type { LoadedSession, LoadedTrack, StudyBasis } from './load-sessions';

export interface WearablePairs {
	session: LoadedSession;
	track: LoadedTrack;
	table: PairTable;
}

/** Pair tables kept at most; one hour of one wearable at 1 s is about 130 kB. */
const KEPT = 2000;
const remembered = new Map<string, PairTable>();

/** May figures rest on this offset: decided by hand, or proposed and reliable. */
export function isAligned(track: LoadedTrack): boolean {
	return track.alignment !== null && (track.alignment.method !== 'proposed' || track.alignment.reliable === true);
}

/**
 * Pairs of every wearable of a session that has heart rate, an offset to rest on and a reference beside it.
 * @param basis plan and kinds of the study; tables are remembered by the plan's version
 */
export function sessionPairs(session: LoadedSession, basis: StudyBasis): WearablePairs[] {
	const reference = session.reference;
	if (!reference?.heartRate) return [];
	const found: WearablePairs[] = [];
	for (const track of session.wearables) {
		if (!track.heartRate || !track.alignment || !isAligned(track)) continue;
		const key = `${track.recordingId}/${basis.planVersion}/${session.fingerprint}/${basis.kinds.map((k) => k.key).join()}`;
		let table = remembered.get(key);
		if (table) remembered.delete(key);
		else
			table = pairTraces({
				reference: reference.heartRate,
				wearable: track.heartRate,
				offsetS: track.alignment.offsetS,
				driftPpm: track.alignment.driftPpm,
				referenceTags: reference.tags,
				wearableTags: track.tags,
				plan: basis.plan,
				kinds: basis.kinds
			});
		remembered.set(key, table);
		if (remembered.size > KEPT) remembered.delete(remembered.keys().next().value as string);
		found.push({ session, track, table });
	}
	return found;
}
