/**
 * The page's side of the offset search: asks the worker for curves and estimates, keeps the newest answer of each
 * wearable, and asks again only when an offset has left what is known.
 */
import { SvelteMap } from 'svelte/reactivity';
import type { ShiftEstimate } from '../../signal/shift';
import { NEAR_REACH_S, WIDE_REACH_S, type CurvePair, type SearchAnswer, type SearchRequest, type SearchTrace } from '../search-messages';

export interface KnownCurves extends CurvePair {
	wideAtS: number;
	nearAtS: number;
	/** The wide curve is determinable nowhere: the recordings do not overlap at those shifts. */
	empty: boolean;
}

/** Share of a curve's reach that an offset may travel before the curve is asked for again. */
const STAY = 0.55;

/** Where the two curves should stand: the wide one round the peak while the offset is near it, the near one round the offset. */
export function curveCentres(offsetS: number, peakS: number | null, known: (Pick<KnownCurves, 'wideAtS' | 'nearAtS'> & { empty?: boolean }) | null): { wideAtS: number; nearAtS: number } {
	// Where nothing overlaps at the offset, the curve shows where something would.
	const lost = known?.empty === true && known.wideAtS !== peakS;
	const wanted = peakS !== null && (lost || known?.wideAtS === peakS || Math.abs(offsetS - peakS) < WIDE_REACH_S * 0.9) ? peakS : null;
	const wideAtS = wanted ?? (known && Math.abs(offsetS - known.wideAtS) < WIDE_REACH_S * STAY ? known.wideAtS : offsetS);
	const nearAtS = known && Math.abs(offsetS - known.nearAtS) < NEAR_REACH_S * STAY ? known.nearAtS : offsetS;
	return { wideAtS, nearAtS };
}

export class OffsetSearch {
	/** Newest curves of each wearable. */
	readonly curves = new SvelteMap<string, KnownCurves>();
	/** Why there are none, where the worker could not answer. */
	readonly problems = new SvelteMap<string, string>();
	private readonly worker: Worker;
	private nextId = 1;
	private readonly waiting = new Map<number, (answer: SearchAnswer) => void>();
	/** What is being asked for each wearable, and what is wanted after that. */
	private readonly asking = new Map<string, { wideAtS: number; nearAtS: number }>();
	private readonly wanted = new Map<string, { wideAtS: number; nearAtS: number }>();
	private closed = false;

	constructor(reference: SearchTrace, wearables: SearchTrace[]) {
		this.worker = new Worker(new URL('../search.worker.ts', import.meta.url), { type: 'module' });
		this.worker.onmessage = ({ data }: MessageEvent<SearchAnswer>) => {
			this.waiting.get(data.id)?.(data);
			this.waiting.delete(data.id);
		};
		this.worker.onerror = () => {
			for (const answer of this.waiting.values()) answer({ id: 0, ok: false, why: 'The offset search stopped. Load the page again to restart it; what you set is saved.' });
			this.waiting.clear();
		};
		this.send({ ask: 'hold', reference, wearables });
	}

	/** Makes sure that the curves round an offset are known or on their way. */
	want(recordingId: string, offsetS: number, peakS: number | null): void {
		const known = this.asking.get(recordingId) ?? this.curves.get(recordingId) ?? null;
		const centres = curveCentres(offsetS, peakS, known);
		if (known && known.wideAtS === centres.wideAtS && known.nearAtS === centres.nearAtS) return;
		if (this.asking.has(recordingId)) this.wanted.set(recordingId, centres);
		else void this.ask(recordingId, centres);
	}

	private async ask(recordingId: string, centres: { wideAtS: number; nearAtS: number }): Promise<void> {
		this.asking.set(recordingId, centres);
		const id = this.nextId++;
		const answer = await this.answerTo(id, { ask: 'curves', id, recordingId, ...centres });
		this.asking.delete(recordingId);
		if (this.closed) return;
		if (answer.ok && 'curves' in answer) this.curves.set(recordingId, { ...answer.curves, ...centres, empty: answer.curves.wide.r.every(Number.isNaN) });
		else if (!answer.ok) this.problems.set(recordingId, answer.why);
		const next = this.wanted.get(recordingId);
		this.wanted.delete(recordingId);
		if (next && answer.ok) void this.ask(recordingId, next);
	}

	/** Searches the whole overlap again. */
	async estimate(recordingId: string): Promise<ShiftEstimate | null> {
		const id = this.nextId++;
		const answer = await this.answerTo(id, { ask: 'estimate', id, recordingId });
		return answer.ok && 'estimate' in answer ? answer.estimate : null;
	}

	private answerTo(id: number, request: SearchRequest): Promise<SearchAnswer> {
		return new Promise((resolve) => {
			this.waiting.set(id, resolve);
			this.send(request);
		});
	}

	private send(request: SearchRequest): void {
		// The samples are cut out of the session's one buffer, and their copies handed over without another copy.
		const cut = (t: SearchTrace): SearchTrace => ({ recordingId: t.recordingId, tS: t.tS.slice(), value: t.value.slice() });
		if (request.ask !== 'hold') return this.worker.postMessage(request);
		const held = { ask: request.ask, reference: cut(request.reference), wearables: request.wearables.map(cut) };
		this.worker.postMessage(held, [held.reference, ...held.wearables].flatMap((t) => [t.tS.buffer, t.value.buffer]));
	}

	close(): void {
		this.closed = true;
		this.worker.terminate();
	}
}
