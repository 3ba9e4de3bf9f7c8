/** How devices smooth: the discrete smoothers that a reference is put through before a wearable is compared with it. */
export interface Smoother {
	/** `none`, `first order 7 s`, `average 9 s`. */
	name: string;
	/** Mean delay of the discrete smoother, s: its sum of delays, not that of the continuous one it stands for. */
	delayS: number;
	apply(value: Float64Array): Float64Array;
}

/** First-order smoothing with time constant `tauS`; its memory is dropped after a gap. Delay 1 / (exp(1/τ) − 1). */
export function firstOrder(tauS: number): Smoother {
	const keep = Math.exp(-1 / tauS);
	return {
		name: `first order ${tauS} s`,
		delayS: 1 / (Math.exp(1 / tauS) - 1),
		apply(value) {
			const out = new Float64Array(value.length);
			let y = NaN;
			for (let i = 0; i < value.length; i++) {
				const v = value[i];
				// NaN in, NaN out, and the next value starts afresh.
				y = y === y ? keep * y + (1 - keep) * v : v;
				out[i] = y;
			}
			return out;
		}
	};
}

/** Mean of the last `windowS` seconds; empty where half of them or more are. Delay (window − 1) / 2. */
export function average(windowS: number): Smoother {
	return {
		name: `average ${windowS} s`,
		delayS: (windowS - 1) / 2,
		apply(value) {
			const out = new Float64Array(value.length);
			let sum = 0;
			let count = 0;
			for (let i = 0; i < value.length; i++) {
				const v = value[i];
				if (v === v) {
					sum += v;
					count++;
				}
				if (i >= windowS) {
					const gone = value[i - windowS];
					if (gone === gone) {
						sum -= gone;
						count--;
					}
				}
				out[i] = v === v && 2 * count > windowS ? sum / count : NaN;
			}
			return out;
		}
	};
}

export const NO_SMOOTHER: Smoother = { name: 'none', delayS: 0, apply: (value) => value };

/** Time constants in order, close enough that the best one can be placed between its neighbours. */
export const FIRST_ORDER_BANK: readonly Smoother[] = [1.3, 2, 3, 4.5, 6.5, 9, 12, 16].map(firstOrder);
export const AVERAGE_BANK: readonly Smoother[] = [5, 9, 13, 18].map(average);
