/**
 * From pointer travel to offset. One to one; a tenth of it with Shift; near the peak the slide rests for a little of
 * the travel, as a detent does, and then goes on without a jump. With Alt there is no detent.
 */
export interface OffsetDrag {
	/** Offset when the drag began, s. */
	startS: number;
	/** Seconds of offset per pixel of travel: on the plot the plot's scale, on the rule the rule's. */
	secondsPerPx: number;
	/** Offset of the correlation peak; null where there is none. */
	peakS: number | null;
}

/** Half width of the zone round the peak, and travel that the slide rests for inside it, s. */
const ZONE_S = 0.15;
const REST_S = 0.08;

/**
 * Offset after some travel.
 *
 * @param travelPx pixels since the drag began, with the share of them that was travelled with Shift already cut to a tenth
 */
export function draggedOffsetS({ startS, secondsPerPx, peakS }: OffsetDrag, travelPx: number, snap: boolean): number {
	const raw = startS + travelPx * secondsPerPx;
	if (!snap || peakS === null) return raw;
	// Where one pixel is more than the rest, the rest is one pixel, so that the peak can be hit at any zoom.
	const scale = Math.max(1, Math.abs(secondsPerPx) / REST_S);
	const zone = ZONE_S * scale;
	const halfRest = (REST_S * scale) / 2;
	const away = raw - peakS;
	if (Math.abs(away) >= zone) return raw;
	if (Math.abs(away) <= halfRest) return peakS;
	return peakS + Math.sign(away) * (Math.abs(away) - halfRest) * (zone / (zone - halfRest));
}

/** Adds up travel, at a tenth while Shift is down, so that pressing or leaving Shift never makes the trace jump. */
export class Travel {
	private lastPx: number;
	totalPx = 0;
	constructor(startPx: number) {
		this.lastPx = startPx;
	}
	to(px: number, fine: boolean): number {
		this.totalPx += (px - this.lastPx) * (fine ? 0.1 : 1);
		this.lastPx = px;
		return this.totalPx;
	}
}
