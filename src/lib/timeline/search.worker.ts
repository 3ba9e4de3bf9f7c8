/** The offset search beside the page, so that no drag ever waits for it. */
import type { Trace } from '../formats/recording';
import { estimateBestFitShift, prepareTrace, shiftCurve, type PreparedTrace } from '../signal';
import { NEAR_REACH_S, NEAR_STEP_S, WIDE_REACH_S, WIDE_STEP_S, type SearchAnswer, type SearchRequest, type SearchTrace } from './search-messages';

const heartRate = ({ tS, value }: SearchTrace): Trace => ({ kind: 'heartRate', tS, value });

let reference: { trace: Trace; prepared: PreparedTrace } | null = null;
const wearables = new Map<string, { trace: Trace; prepared: PreparedTrace }>();

function held(recordingId: string) {
	const wearable = wearables.get(recordingId);
	if (!reference || !wearable) throw new Error('There is no pair of traces to search.');
	return { reference, wearable };
}

function answer(request: Exclude<SearchRequest, { ask: 'hold' }>): SearchAnswer {
	const pair = held(request.recordingId);
	if (request.ask === 'estimate') return { id: request.id, ok: true, estimate: estimateBestFitShift(pair.reference.trace, pair.wearable.trace) };
	const around = (atS: number, reachS: number, stepS: number) =>
		shiftCurve(pair.reference.prepared, pair.wearable.prepared, { fromS: atS - reachS, toS: atS + reachS, stepS });
	return { id: request.id, ok: true, curves: { wide: around(request.wideAtS, WIDE_REACH_S, WIDE_STEP_S), near: around(request.nearAtS, NEAR_REACH_S, NEAR_STEP_S) } };
}

self.onmessage = ({ data }: MessageEvent<SearchRequest>) => {
	if (data.ask === 'hold') {
		const ready = (trace: SearchTrace) => ({ trace: heartRate(trace), prepared: prepareTrace(trace) });
		reference = ready(data.reference);
		wearables.clear();
		for (const wearable of data.wearables) wearables.set(wearable.recordingId, ready(wearable));
		return;
	}
	let said: SearchAnswer;
	try {
		said = answer(data);
	} catch (cause) {
		said = { id: data.id, ok: false, why: cause instanceof Error ? cause.message : String(cause) };
	}
	self.postMessage(said);
};
