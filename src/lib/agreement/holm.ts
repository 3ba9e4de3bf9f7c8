/**
 * Holm's step-down adjustment of p values for several comparisons.
 *
 * @param p values 0 to 1, in any order
 * @returns adjusted values in the same order: reject where at most the level that was set beforehand
 * @see Holm S (1979) Scand J Stat 6:65-70
 */
export function holm(p: readonly number[]): number[] {
	const order = p.map((_, i) => i).sort((a, b) => p[a] - p[b]);
	const adjusted = new Array<number>(p.length);
	let largest = 0;
	order.forEach((index, rank) => {
		largest = Math.max(largest, Math.min(1, (p.length - rank) * p[index]));
		adjusted[index] = largest;
	});
	return adjusted;
}
