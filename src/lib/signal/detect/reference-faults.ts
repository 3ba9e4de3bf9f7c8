/** Reference faults: the reference leaps as no heart does, and the wearable does not leap with it. */
import type { CommonSeconds } from './common-seconds';
import { asScore, rising, type Proposal } from './proposal';
import { runsOf } from './regions';
import { duration } from './words';

/** Unsound pieces this close together are one fault, s. */
const BRIDGE_S = 75;
const LEAST_SECONDS = 3;
/** A fault that begins this soon after the first reading began with it: dry electrodes. */
const FROM_THE_START_S = 45;
/** A wearable that takes the same leap speaks for the heart (a recorder's gap, a fast start), bpm. */
const SAME_LEVEL_BPM = 8;

export function referenceFaults(common: CommonSeconds): Proposal[] {
	const { strap, toWearableS } = common;
	const found: Proposal[] = [];
	for (const run of runsOf(strap.value.length, (i) => strap.unsound[i] === 1, BRIDGE_S)) {
		let unsound = 0;
		let alike = 0;
		let compared = 0;
		let largestLeap = 0;
		for (let i = run.from; i <= run.to && i < strap.value.length; i++) {
			if (i > 0) largestLeap = Math.max(largestLeap, Math.abs(strap.value[i] - strap.value[i - 1]) || 0);
			if (i === run.to || !strap.unsound[i]) continue;
			unsound++;
			const k = Math.round(toWearableS(strap.startS + i)) - common.startS;
			const w = common.wearable[k];
			if (w === undefined || Number.isNaN(w)) continue;
			compared++;
			if (Math.abs(w - strap.value[i]) < SAME_LEVEL_BPM) alike++;
		}
		if (unsound < LEAST_SECONDS || (compared > 0 && alike > 0.5 * compared)) continue;
		const from = run.from <= FROM_THE_START_S ? 0 : run.from;
		found.push({
			kind: 'reference-fault',
			on: 'reference',
			startS: strap.startS + from,
			endS: strap.startS + run.to,
			score: asScore(0.3 + 0.3 * rising(unsound, 0, 10) + (compared > 0 ? 0.4 * (1 - alike / compared) : 0)),
			evidence:
				`The reference leaps by up to ${Math.round(largestLeap)} bpm from one second to the next, ${duration(unsound)} of it off its own course` +
				(compared > 0 ? ', and the wearable does not follow.' : '; the wearable has no readings there to compare.')
		});
	}
	return found;
}
