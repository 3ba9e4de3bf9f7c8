/** One line of a plot and where its clock stands. */
import type { AlignmentState } from '../model';
import type { LineSamples } from './line-path';

export interface PlotLayer {
	/** Tells layers apart; a layer that keeps its key, samples and alignment is not projected again. */
	key: string;
	samples: LineSamples;
	alignment: Pick<AlignmentState, 'offsetS' | 'driftPpm'>;
	/** First sample of the recording, own clock, from which drift counts. */
	firstS: number;
	/** Token of the stroke's colour. */
	token: string;
	widthPx: number;
	dash: readonly number[];
}

/** A filled stripe between two values, such as ±5 bpm. */
export interface PlotBand {
	low: number;
	high: number;
	token: string;
}

export interface PlotRule {
	value: number;
	token: string;
}
