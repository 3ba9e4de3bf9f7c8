/** Moments to which the edge of a tag snaps: what a careful hand would aim at. */
import { traceOf, type Trace } from '../formats/recording';
import { onAxis } from './model';
import { placeOf, spanOfTag, standingTags, trackOf, type EditorState, type EditorTrack } from './state';

/** A missing stretch is one of more than this many usual spacings. */
const GAP_SPACINGS = 3;
/** Means of this many seconds on either side are compared for a change of cadence. */
const CADENCE_WINDOW_S = 4;
/** Smallest change of cadence that counts, per minute. */
const CADENCE_STEP = 15;

/** Times on either side of every gap, and the first and last reading. */
export function edgesOfReadings(trace: Pick<Trace, 'tS'>): number[] {
	const { tS } = trace;
	if (tS.length === 0) return [];
	const found = [tS[0]];
	if (tS.length > 2) {
		const steps = Float64Array.from({ length: tS.length - 1 }, (_, i) => tS[i + 1] - tS[i]).sort();
		const limit = Math.max(GAP_SPACINGS * steps[steps.length >> 1], 2.2 * steps[Math.floor(steps.length * 0.95)]);
		for (let i = 1; i < tS.length; i++) if (tS[i] - tS[i - 1] > limit) found.push(tS[i - 1], tS[i]);
	}
	found.push(tS[tS.length - 1]);
	return found;
}

/** Times at which cadence changes by a step: moving begins or stops, or the pace changes within a few seconds. */
export function cadenceChanges(trace: Pick<Trace, 'tS' | 'value'>): number[] {
	const { tS, value } = trace;
	const found: number[] = [];
	let best: { at: number; by: number } | null = null;
	const sums = new Float64Array(value.length + 1);
	for (let i = 0; i < value.length; i++) sums[i + 1] = sums[i] + value[i];
	let low = 0;
	let high = 0;
	for (let i = 1; i < tS.length; i++) {
		while (tS[low] < tS[i] - CADENCE_WINDOW_S) low++;
		while (high < tS.length && tS[high] < tS[i] + CADENCE_WINDOW_S) high++;
		const by = low < i && high > i ? Math.abs((sums[high] - sums[i]) / (high - i) - (sums[i] - sums[low]) / (i - low)) : 0;
		if (by >= CADENCE_STEP) {
			if (best === null || by > best.by) best = { at: tS[i], by };
		} else if (best !== null) {
			found.push(best.at);
			best = null;
		}
	}
	if (best !== null) found.push(best.at);
	return found;
}

const ofTrack = new WeakMap<EditorTrack, { readings: number[]; cadence: number[] }>();
function ownMoments(track: EditorTrack): { readings: number[]; cadence: number[] } {
	let moments = ofTrack.get(track);
	if (!moments) {
		const heartRate = traceOf(track, 'heartRate');
		const cadence = traceOf(track, 'cadence');
		moments = { readings: heartRate ? edgesOfReadings(heartRate) : [], cadence: cadence ? cadenceChanges(cadence) : [] };
		ofTrack.set(track, moments);
	}
	return moments;
}

/**
 * Where an edge of a tag on this recording may snap to, on the axis: changes of cadence (any recording), first and
 * last reading and the ends of gaps (its own), edges of tags on other recordings, and the cursor.
 */
export function snapTargets(state: EditorState, recordingId: string): number[] {
	const targets: number[] = [state.cursorS];
	for (const track of state.tracks) {
		const place = placeOf(state, track.recordingId);
		const { readings, cadence } = ownMoments(track);
		for (const tS of cadence) targets.push(onAxis(tS, place, track.firstS));
		if (track.recordingId === recordingId) for (const tS of readings) targets.push(onAxis(tS, place, track.firstS));
	}
	for (const tag of standingTags(state)) {
		if (tag.recordingId === recordingId || !trackOf(state, tag.recordingId)) continue;
		const { fromS, toS } = spanOfTag(state, tag);
		targets.push(fromS, toS);
	}
	return targets;
}

/** The target nearest to a moment, within reach; null when there is none. */
export function nearestSnap(targets: readonly number[], axisS: number, reachS: number): number | null {
	let best: number | null = null;
	for (const target of targets) if (Math.abs(target - axisS) <= reachS && (best === null || Math.abs(target - axisS) < Math.abs(best - axisS))) best = target;
	return best;
}
