/** Straight-line scales and their ticks, shared by all charts. */
export interface Scale {
	(value: number): number;
	domain: [number, number];
	range: [number, number];
	/** Clips to the frame: a value outside touches the edge. */
	clipped(value: number): number;
}

/** Maps `domain` to `range` (pixels); either may run downwards. */
export function linearScale(domain: [number, number], range: [number, number]): Scale {
	const slope = (range[1] - range[0]) / (domain[1] - domain[0]);
	const at = (value: number) => range[0] + (value - domain[0]) * slope;
	const [low, high] = domain[0] < domain[1] ? domain : [domain[1], domain[0]];
	return Object.assign(at, { domain, range, clipped: (value: number) => at(Math.min(high, Math.max(low, value))) });
}

/** Multiples of `step` from the first at or above `from` to the last at or below `to`. */
export function multiples(from: number, to: number, step: number): number[] {
	const first = Math.ceil(from / step - 1e-9);
	const last = Math.floor(to / step + 1e-9);
	return Array.from({ length: Math.max(0, last - first + 1) }, (_, i) => (first + i) * step);
}
