/**
 * Geometry of the offset rule: a true nonius, drawn to scale.
 *
 * The main scale has one tick every 0.1 s. The slide has ten divisions over 0.9 s and its index (division 0) stands at
 * the offset. Division i therefore stands at offset + 0.09 i, and meets a tick of the main scale exactly when i is the
 * hundredth by which the index has passed the tick to its left. So the offset is read from the ticks alone: the tick
 * left of the index, plus the meeting division in hundredths. This holds on both sides of zero: at −1.18 s the index
 * has passed −1.2 and division 2 meets, −1.2 + 0.02 = −1.18.
 *
 * Positions come from the stored offset and are never rounded. An offset between two hundredths meets nowhere quite;
 * the nearest division is then the reading.
 */
export const MAIN_STEP_S = 0.1;
export const SLIDE_STEP_S = 0.09;
export const SLIDE_DIVISIONS = 10;
export const SLIDE_SPAN_S = SLIDE_STEP_S * SLIDE_DIVISIONS;

/** How seconds of offset become pixels across the rule. */
export interface RuleFrame {
	/** Offset that stands at `centreX`, s. */
	centreS: number;
	centreX: number;
	widthPx: number;
	pxPerS: number;
}

export interface MainTick {
	/** The value in whole tenths of a second, so that labels are exact. */
	tenths: number;
	x: number;
	/** Whole second, half second or tenth. */
	rank: 'second' | 'half' | 'tenth';
}

export interface SlideTick {
	division: number;
	x: number;
}

export interface NoniusReading {
	/** Tick of the main scale left of the index, in tenths of a second. */
	belowTenths: number;
	/** Division that meets a tick of the main scale, 0 to 9. */
	division: number;
	/** Tick of the main scale that it meets, in tenths of a second. */
	meetsTenths: number;
	/** What the ticks say: belowTenths / 10 + division / 100, s. */
	readingS: number;
}

/** Position of an offset across the rule, px, unrounded. */
export function ruleX(offsetS: number, frame: RuleFrame): number {
	return frame.centreX + (offsetS - frame.centreS) * frame.pxPerS;
}

/** Offset at a position across the rule, s. */
export function ruleOffsetS(x: number, frame: RuleFrame): number {
	return frame.centreS + (x - frame.centreX) / frame.pxPerS;
}

/** Ticks of the main scale inside the frame, left to right. */
export function mainTicks(frame: RuleFrame): MainTick[] {
	const first = Math.ceil(ruleOffsetS(0, frame) * 10);
	const last = Math.floor(ruleOffsetS(frame.widthPx, frame) * 10);
	return Array.from({ length: Math.max(0, last - first + 1) }, (_, i) => {
		const tenths = first + i;
		const rank = tenths % 10 === 0 ? 'second' : tenths % 5 === 0 ? 'half' : 'tenth';
		return { tenths, x: ruleX(tenths / 10, frame), rank };
	});
}

/** The eleven ticks of the slide, index first. */
export function slideTicks(offsetS: number, frame: RuleFrame): SlideTick[] {
	return Array.from({ length: SLIDE_DIVISIONS + 1 }, (_, division) => ({
		division,
		x: ruleX(offsetS + division * SLIDE_STEP_S, frame)
	}));
}

/**
 * What the ticks say of an offset.
 *
 * The division is the one that stands nearest to a tick of the main scale; the reading is within 0.005 s of the offset.
 * Where division 10 meets as well as 0 does, the index itself stands on a tick and 0 is read.
 */
export function noniusReading(offsetS: number): NoniusReading {
	const hundredths = Math.round(offsetS * 100);
	const division = ((hundredths % 10) + 10) % 10;
	const belowTenths = (hundredths - division) / 10;
	return { belowTenths, division, meetsTenths: belowTenths + division, readingS: hundredths / 100 };
}

/**
 * Centre of the main scale after the offset has moved: it stays where it is, and follows only as far as keeps the
 * index inside the frame with `marginPx` to its left and the whole slide with `marginPx` to its right.
 */
export function centreFollowing(offsetS: number, frame: RuleFrame, marginPx: number): number {
	const lowest = offsetS - (frame.widthPx - marginPx - frame.centreX) / frame.pxPerS + SLIDE_SPAN_S;
	const highest = offsetS - (marginPx - frame.centreX) / frame.pxPerS;
	return lowest > highest ? offsetS : Math.min(highest, Math.max(lowest, frame.centreS));
}
