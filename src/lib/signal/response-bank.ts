/**
 * From a coarse shift to a fraction of a second, by comparing the wearable with the reference as several devices would
 * smooth it.
 *
 * A device that smooths looks late and flat. Fitting it to the bare reference finds a shift somewhere inside its
 * response; fitting it to the reference through the right smoother finds the sum of clock and delay. The smoother with
 * the least loss decides; its own delay is added back.
 */
import { descend, leastWholeSecond } from './close-search';
import { compared, type Compared } from './disagreement';
import { AVERAGE_BANK, FIRST_ORDER_BANK, NO_SMOOTHER, type Smoother } from './smoothers';

export interface Refined {
	/** Shift that puts the clocks together and forgives the device's delay, by the sum of delays, s. */
	totalS: number;
	/** Shift of least disagreement with the bare reference, s. */
	plainS: number;
	loss: number;
	/** The smoother that explains the wearable best. */
	smoother: Smoother;
	/** Every smoother's own best: no smoothing, time constants in order, averages in order. */
	fits: Fit[];
	/** The least loss stood at the edge of what was looked at. */
	atEdge: boolean;
}

/** How far from the coarse shift the close search looks, s. */
const REACH_S = 8;
/** What the bank leaves of a smoothing device's delay: the mean over kinds of simulated devices with known delay. */
const LEFT_BY_BANK_S = 0.05;

export interface Fit {
	smoother: Smoother;
	/** The reference through the smoother. */
	reference: Compared;
	/** Shift of least disagreement through it, s. */
	shiftS: number;
	loss: number;
	atEdge: boolean;
}

/**
 * Refines a coarse shift.
 * @param bare the reference as recorded
 * @param w the wearable
 * @param coarseS shift from the search over all overlaps, s
 * @param every look at one second in this many only; for recordings of many hours
 */
export function refine(bare: Compared, w: Compared, coarseS: number, every = 1): Refined {
	const nearest = leastWholeSecond(bare, w, Math.round(coarseS), REACH_S, every);
	const none: Fit = { smoother: NO_SMOOTHER, reference: bare, ...descend(bare, w, nearest, REACH_S, every) };
	const through = (smoother: Smoother): Fit => {
		const r = compared(bare.startS, smoother.apply(bare.value));
		// Through a smoother the reference is later: the matching shift is larger by most of the smoother's delay.
		return { smoother, reference: r, ...descend(r, w, Math.round(none.shiftS + 0.85 * smoother.delayS), REACH_S, every) };
	};
	const fits = [none, ...FIRST_ORDER_BANK.map(through), ...AVERAGE_BANK.map(through)];
	let best = 0;
	for (let k = 1; k < fits.length; k++) if (fits[k].loss < fits[best].loss) best = k;
	return {
		totalS: totalOf(best, fits.map((fit) => fit.shiftS), fits.map((fit) => fit.loss)),
		plainS: none.shiftS,
		loss: fits[best].loss,
		smoother: fits[best].smoother,
		fits,
		atEdge: Math.abs(nearest - Math.round(coarseS)) >= REACH_S || fits[best].atEdge
	};
}

/** Delays of the bank in the order of `Refined.fits`, with what it leaves. */
const DELAY_S = [0, ...[...FIRST_ORDER_BANK, ...AVERAGE_BANK].map((smoother) => smoother.delayS + LEFT_BY_BANK_S)];

/**
 * Total shift of the bank's best member: its shift less its delay; among time constants, read between the best and
 * its two neighbours at the least of the parabola through their losses.
 * @param best its place in the bank
 * @param shiftsS shift through each member, s
 * @param losses disagreement of each member
 */
export function totalOf(best: number, shiftsS: ArrayLike<number>, losses: ArrayLike<number>): number {
	const at = (k: number) => shiftsS[k] - DELAY_S[k];
	// 0 is the bare reference; the time constants stand at 1 to their number.
	if (best < 2 || best >= FIRST_ORDER_BANK.length) return at(best);
	const [a, b, c] = [best - 1, best, best + 1];
	const curve = losses[a] - 2 * losses[b] + losses[c];
	if (!(curve > 0) || !Number.isFinite(curve)) return at(b);
	const u = Math.max(-0.5, Math.min(0.5, (0.5 * (losses[a] - losses[c])) / curve));
	return at(b) + (u * (at(c) - at(a))) / 2 + (u * u * (at(a) - 2 * at(b) + at(c))) / 2;
}
