/** The reference as the wearable would show it: smoothed and delayed as the wearable's readings are where they are sound. */

/** How a device smooths: moving average, then first order; its delay is within `lagS` or comes by the smoothing itself. */
export interface Smoother {
	tauS: number;
	windowS: number;
}

/** Smoothers of the bank: first-order time constants and moving-average windows, s. */
const BANK: readonly Smoother[] = [
	{ tauS: 0, windowS: 0 },
	{ tauS: 3, windowS: 0 },
	{ tauS: 6, windowS: 0 },
	{ tauS: 10, windowS: 0 },
	{ tauS: 15, windowS: 0 },
	{ tauS: 0, windowS: 7 },
	{ tauS: 0, windowS: 13 },
	{ tauS: 0, windowS: 20 },
	{ tauS: 5, windowS: 8 }
];
/** The smoother's mean delay is taken back first; around that, this much is tried, s: a given alignment may hold the clock alone. */
const EARLIEST_S = -6;
const LATEST_S = 14;
/** Disagreement that counts half of the whole, bpm: a fault does not decide. */
const HALF_LOSS_BPM = 5;
/** Every how many seconds the loss is taken. */
const STRIDE_S = 5;
/** Fewer common seconds than this do not tell one smoother from another. */
const LEAST_SECONDS = 120;

export interface Expected {
	/** Expected readings on the wearable's seconds. */
	column: Float64Array;
	smoother: Smoother;
	/** What the column was moved by after smoothing, s; positive = later. */
	lagS: number;
}

/**
 * Chooses smoother and residual delay by the smallest bounded loss mean e²/(e² + 25).
 * @param sound reference on its own seconds, bpm; NaN where unsound
 * @param wearable readings on the wearable's seconds
 * @param onWearable puts a column of the reference's seconds on the wearable's
 * @returns expected readings on the wearable's seconds, and how they came about; the plain reference where there is too little to choose by
 */
export function responseLike(sound: Float64Array, wearable: Float64Array, onWearable: (column: Float64Array) => Float64Array): Expected {
	const plain = onWearable(sound);
	let best = { loss: lossAt(plain, wearable, 0), column: plain, lagS: 0, smoother: BANK[0] };
	if (!Number.isFinite(best.loss)) return { column: plain, lagS: 0, smoother: BANK[0] };
	for (const smoother of BANK) {
		const { tauS, windowS } = smoother;
		const column = tauS === 0 && windowS === 0 ? plain : onWearable(smoothedLike(sound, smoother));
		const delayS = Math.round(tauS + windowS / 2);
		let lagS = 0;
		let loss = Infinity;
		const at = (lag: number) => {
			if (lag < EARLIEST_S - delayS || lag > LATEST_S) return;
			const l = lossAt(column, wearable, lag);
			if (l < loss) {
				loss = l;
				lagS = lag;
			}
		};
		for (let lag = EARLIEST_S - delayS; lag <= LATEST_S; lag += 4) at(lag);
		for (const step of [2, 1]) {
			const middle = lagS;
			at(middle - step);
			at(middle + step);
		}
		if (loss < best.loss * 0.995) best = { loss, column, lagS, smoother };
	}
	return { ...best, column: best.lagS === 0 ? best.column : moved(best.column, best.lagS) };
}

/** Mean bounded loss with the column moved `lag` seconds later. */
function lossAt(column: Float64Array, wearable: Float64Array, lag: number): number {
	let sum = 0;
	let n = 0;
	for (let i = 0; i < wearable.length; i += STRIDE_S) {
		const e = wearable[i] - (column[i - lag] ?? NaN);
		if (e !== e) continue;
		sum += (e * e) / (e * e + HALF_LOSS_BPM * HALF_LOSS_BPM);
		n++;
	}
	return n * STRIDE_S < LEAST_SECONDS ? Infinity : sum / n;
}

/** A column as a device with this smoother shows it; begins anew after a hole. */
export const smoothedLike = (value: Float64Array, { tauS, windowS }: Smoother): Float64Array => firstOrder(movingAverage(value, windowS), tauS);

export function moved(column: Float64Array, lag: number): Float64Array {
	const out = new Float64Array(column.length).fill(NaN);
	for (let i = 0; i < out.length; i++) if (i - lag >= 0 && i - lag < column.length) out[i] = column[i - lag];
	return out;
}

/** First-order smoothing that begins anew after a hole. */
function firstOrder(value: Float64Array, tauS: number): Float64Array {
	if (tauS === 0) return value;
	const keep = Math.exp(-1 / tauS);
	const out = new Float64Array(value.length).fill(NaN);
	let state = NaN;
	for (let i = 0; i < value.length; i++) {
		const v = value[i];
		state = v !== v ? NaN : state !== state ? v : keep * state + (1 - keep) * v;
		out[i] = state;
	}
	return out;
}

/** Mean of the last `windowS` seconds since the last hole. */
function movingAverage(value: Float64Array, windowS: number): Float64Array {
	if (windowS === 0) return value;
	const out = new Float64Array(value.length).fill(NaN);
	let sum = 0;
	let n = 0;
	for (let i = 0; i < value.length; i++) {
		const v = value[i];
		if (v !== v) {
			sum = 0;
			n = 0;
			continue;
		}
		sum += v;
		n++;
		if (n > windowS) {
			sum -= value[i - windowS];
			n--;
		}
		out[i] = sum / n;
	}
	return out;
}
