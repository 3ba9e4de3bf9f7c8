/** Where two compared traces disagree least, near a shift that is known to some seconds. */
import { disagreement, type Compared } from './disagreement';

const FINE_STEP_S = 0.25;

export interface Least {
	shiftS: number;
	loss: number;
	/** The search was still going downhill when it ran out of reach. */
	atEdge: boolean;
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
export function descend(r: Compared, w: Compared, start: number, reachS: number, every = 1): Least {
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
		for (let moves = 0; moves < reachS; moves++) {
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
	return { shiftS: s + FINE_STEP_S * vertex(lossAt(s - FINE_STEP_S), loss, lossAt(s + FINE_STEP_S)), loss, atEdge: Math.abs(s - start) >= reachS };
}

/** Place of the least value of a parabola through three equally spaced ones, in steps from the middle; at most half a step. */
function vertex(before: number, here: number, after: number): number {
	const curve = before - 2 * here + after;
	return curve > 0 && Number.isFinite(curve) ? Math.max(-0.5, Math.min(0.5, (0.5 * (before - after)) / curve)) : 0;
}
