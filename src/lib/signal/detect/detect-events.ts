/** One wearable against the reference: everything that is worth an analyst's look. */
import type { Trace } from '../../formats/recording';
import { cadenceBand } from './cadence-seconds';
import { classifiedRegions } from './classify';
import { commonSeconds } from './common-seconds';
import { dropouts } from './dropouts';
import { holds } from './holds';
import type { ClockMapping, Proposal } from './proposal';
import { referenceFaults } from './reference-faults';
import { rests } from './rests';

export interface DetectionInput {
	/** Heart rate of the reference, bpm, on its own clock. */
	reference: Pick<Trace, 'tS' | 'value'>;
	/** Heart rate of the wearable, bpm, on its own clock. */
	wearable: Pick<Trace, 'tS' | 'value'>;
	/** From the wearable's clock to the reference's. Either shift will do, the clocks' or the best fit: what lag remains is found. */
	alignment: ClockMapping;
	/** Steps or crank turns a minute; a missing reading means standing. */
	cadence?: Pick<Trace, 'tS' | 'value'>;
	/** m/s; a missing reading means standing. */
	speed?: Pick<Trace, 'tS' | 'value'>;
	/** Whose clock cadence and speed are on; default: the reference's. */
	movementOn?: 'reference' | 'wearable';
}

/**
 * Proposes stretches with a kind, a score and the evidence in words; applies nothing.
 *
 * The reference, cleared of leaps that no heart takes, is smoothed and delayed as the wearable's own readings are, and
 * the wearable is compared with all that this expected course passes through within ±6 s. Stretches outside are grown
 * and asked in order: onset delay, spike, half or double rate, cadence lock, missed peak, motion. Dropouts, holds,
 * reference faults and rests are found by their own marks. A long disagreement without any mark is not proposed.
 *
 * @param input traces with strictly increasing times; values outside of 30 to 230 bpm count as missing
 * @returns proposals in the order of their start on the reference's clock; none where there is nothing to compare
 */
export function detectEvents(input: DetectionInput): Proposal[] {
	const { reference, wearable, alignment, cadence, speed, movementOn = 'reference' } = input;
	const common = commonSeconds(reference, wearable, alignment);
	const own = (s: number) => s;
	const band = cadence && cadence.tS.length > 1 ? cadenceBand(cadence, common.startS, common.length, movementOn === 'reference' ? common.toReferenceS : own) : null;
	const frozen = holds(wearable, common);
	const proposals = [
		...dropouts(wearable, 'wearable'),
		...frozen.map((f) => f.proposal),
		...classifiedRegions(common, band, frozen),
		...referenceFaults(common),
		...rests(common, { cadence, speed, fromReferenceS: movementOn === 'reference' ? own : common.toWearableS })
	];
	const startOnReferenceS = (p: Proposal) => (p.on === 'reference' ? p.startS : common.toReferenceS(p.startS));
	return proposals.sort((a, b) => startOnReferenceS(a) - startOnReferenceS(b));
}
