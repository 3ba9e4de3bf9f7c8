/** What the page and its offset-search worker say to each other. */
import type { ShiftCurve, ShiftEstimate } from '../signal/shift';

/** Heart rate on the recording's own clock. */
export interface SearchTrace {
	recordingId: string;
	tS: Float64Array;
	value: Float64Array;
}

export type SearchRequest =
	| { ask: 'hold'; reference: SearchTrace; wearables: SearchTrace[] }
	/** Correlation around a shift: wide at whole seconds, near finely. */
	| { ask: 'curves'; id: number; recordingId: string; wideAtS: number; nearAtS: number }
	| { ask: 'estimate'; id: number; recordingId: string };

export interface CurvePair {
	wide: ShiftCurve;
	near: ShiftCurve;
}

export type SearchAnswer =
	| { id: number; ok: true; curves: CurvePair }
	| { id: number; ok: true; estimate: ShiftEstimate }
	| { id: number; ok: false; why: string };

/** Reach and step of the two curves, s. */
export const WIDE_REACH_S = 40;
export const WIDE_STEP_S = 1;
export const NEAR_REACH_S = 4;
export const NEAR_STEP_S = 0.1;
