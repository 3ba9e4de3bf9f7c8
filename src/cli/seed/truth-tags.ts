/** What an analyst would tag, taken from the simulator's truth: where faults show, with a hand that is not exact. */
import { randomStream } from '../../lib/simulate';
import type { ImportedDemo } from './import-sessions';

export interface TruthTag {
	/** Device number; 0 is the reference. */
	number: number;
	kind: string;
	/** On the recording's own clock, epoch seconds. */
	startS: number;
	endS: number;
}

/** Shorter stretches are not worth a tag. */
const SHORTEST_S = 3;
/** Breaks from here on are tagged as rest. */
const SHORTEST_REST_S = 25;

/** In order of trace and time; tags of one trace do not overlap. */
export function truthTags(demo: ImportedDemo): TruthTag[] {
	const hand = randomStream(demo.plan.seed, 'hand of the analyst');
	const near = (tS: number) => Math.round(tS + hand.uniform(-1.4, 1.4));
	const tags: TruthTag[] = [];
	const { reference, wearables, course } = demo.session;
	if (demo.recordingIds.has(0)) {
		for (const fault of reference.faults) tags.push({ number: 0, kind: 'reference-fault', startS: near(fault.startS), endS: near(fault.endS) });
		for (const c of course) if (c.kind === 'break' && c.lengthS >= SHORTEST_REST_S) tags.push({ number: 0, kind: 'rest', startS: near(c.startS), endS: near(c.startS + c.lengthS) });
	}
	wearables.forEach((wearable, i) => {
		if (!demo.recordingIds.has(i + 1)) return;
		const { events, clockOffsetS } = wearable.truth;
		for (const { kind, visible } of events) {
			if (visible === null) continue;
			tags.push({ number: i + 1, kind, startS: near(visible.startS - clockOffsetS), endS: near(visible.endS - clockOffsetS) });
		}
	});
	return apart(tags);
}

function apart(tags: TruthTag[]): TruthTag[] {
	const kept: TruthTag[] = [];
	for (const tag of [...tags].sort((a, b) => a.number - b.number || a.startS - b.startS)) {
		const last = kept.at(-1);
		const startS = last?.number === tag.number ? Math.max(tag.startS, last.endS) : tag.startS;
		if (tag.endS - startS >= SHORTEST_S) kept.push({ ...tag, startS });
	}
	return kept;
}
