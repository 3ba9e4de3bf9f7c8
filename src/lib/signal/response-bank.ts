/**
 * From a coarse shift to a fraction of a second, by comparing the wearable with the reference as several devices would
 * smooth it.
 *
 * A device that smooths looks late and flat. Fitting it to the bare reference finds a shift somewhere inside its
 * response; fitting it to the reference through the right smoother finds the sum of clock and delay. The smoother with
 * the least loss decides; its own delay is added back.
 */
import { compared, disagreement, type Compared } from './disagreement';
import { AVERAGE_BANK, FIRST_ORDER_BANK, NO_SMOOTHER, type Smoother } from './smoothers';

export interface Refined {
	/** Shift that puts the clocks together and forgives the device's delay, by the sum of delays, s. */
	totalS: number;
	/** Shift of least disagreement with the bare reference, s. */
	plainS: number;
	loss: number;
	/** The smoother that explains the wearable best, and the shift through it, s. */
	smoother: Smoother;
	throughSmootherS: number;
	/** The least loss stood at the edge of what was looked at. */
	atEdge: boolean;
}

/** How far from the coarse shift the close search looks, s. */
const REACH_S = 8;
const FINE_STEP_S = 0.25;
/** What the bank leaves of a smoothing device's delay: the mean over kinds of simulated devices with known delay. */
const LEFT_BY_BANK_S = 0.05;

interface Fit {
	smoother: Smoother;
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
	const none = descend(bare, w, nearest, every, NO_SMOOTHER);
	const through = (smoother: Smoother): Fit => {
		const r = compared(bare.startS, smoother.apply(bare.value));
		// Through a smoother the reference is later: the matching shift is larger by most of the smoother's delay.
		return descend(r, w, Math.round(none.shiftS + 0.85 * smoother.delayS), every, smoother);
	};
	const firstOrders = FIRST_ORDER_BANK.map(through);
	const all = [none, ...firstOrders, ...AVERAGE_BANK.map(through)];
	let best = none;
	for (const fit of all) if (fit.loss < best.loss) best = fit;
	return {
		totalS: totalOf(best, firstOrders),
		plainS: none.shiftS,
		loss: best.loss,
		smoother: best.smoother,
		throughSmootherS: best.shiftS,
		atEdge: Math.abs(nearest - Math.round(coarseS)) >= REACH_S || best.atEdge
	};
}

/** The best fit's shift less its smoother's delay; among time constants, read between the best and its two neighbours. */
function totalOf(best: Fit, firstOrders: Fit[]): number {
	const at = ({ shiftS, smoother }: Fit) => (smoother === NO_SMOOTHER ? shiftS : shiftS - smoother.delayS - LEFT_BY_BANK_S);
	const i = firstOrders.indexOf(best);
	if (i < 1 || i === firstOrders.length - 1) return at(best);
	const [a, b, c] = [firstOrders[i - 1], best, firstOrders[i + 1]];
	const curve = a.loss - 2 * b.loss + c.loss;
	if (!(curve > 0) || !Number.isFinite(curve)) return at(best);
	const u = Math.max(-0.5, Math.min(0.5, (0.5 * (a.loss - c.loss)) / curve));
	// The parabola through the three totals (Lagrange), at the place of the least loss.
	return at(b) + (u * (at(c) - at(a))) / 2 + (u * u * (at(a) - 2 * at(b) + at(c))) / 2;
}

/** The whole second of least disagreement within `reachS` of `centre`. */
export function leastWholeSecond(r: Compared, w: Compared, centre: number, reachS: number, every = 1): number {
	let least = centre;
	let loss = Infinity;
	for (let s = centre - reachS; s <= centre + reachS; s++) {
		const l = disagreement(r, w, s, every);
		if (l < loss) {
			loss = l;
			least = s;
		}
	}
	return least;
}

/** Walks downhill by whole seconds, then by quarters; a parabola gives the rest. */
function descend(r: Compared, w: Compared, start: number, every: number, smoother: Smoother): Fit {
	const known = new Map<number, number>();
	const lossAt = (s: number) => {
		let l = known.get(s);
		if (l === undefined) {
			l = disagreement(r, w, s, every);
			known.set(s, l);
		}
		return l;
	};
	let s = start;
	for (const step of [1, FINE_STEP_S]) {
		for (let moves = 0; moves < REACH_S; moves++) {
			const here = lossAt(s);
			const before = lossAt(s - step);
			const after = lossAt(s + step);
			if (before < here && before <= after) s -= step;
			else if (after < here) s += step;
			else break;
		}
		// The parabola of the whole seconds saves most of the quarter steps.
		if (step === 1) s += Math.round(vertex(lossAt(s - 1), lossAt(s), lossAt(s + 1)) / FINE_STEP_S) * FINE_STEP_S;
	}
	const loss = lossAt(s);
	return { smoother, shiftS: s + FINE_STEP_S * vertex(lossAt(s - FINE_STEP_S), loss, lossAt(s + FINE_STEP_S)), loss, atEdge: Math.abs(s - start) >= REACH_S };
}

/** Place of the least value of a parabola through three equally spaced ones, in steps from the middle; at most half a step. */
function vertex(before: number, here: number, after: number): number {
	const curve = before - 2 * here + after;
	return curve > 0 && Number.isFinite(curve) ? Math.max(-0.5, Math.min(0.5, (0.5 * (before - after)) / curve)) : 0;
}
