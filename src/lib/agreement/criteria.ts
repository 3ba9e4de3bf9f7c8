/** Acceptance criteria as data: published ones with their source, and a team's own. */
import { isDetermined, type Figure, type Interval } from './determinable';
import type { Figures } from './figures';

export interface Criterion {
	id: string;
	/** What is asked, in one sentence. */
	text: string;
	source: string;
	/** True when the wording was not seen in print by whoever entered it. */
	fromMemory: boolean;
	figure: 'mape' | 'mae' | 'withinEc13' | 'within5bpm' | 'within10pct' | 'ccc';
	/** In the figure's unit. */
	limit: number;
	side: 'at most' | 'at least';
}

/** Quoted from secondary sources; say so wherever they are shown. */
export const PUBLISHED_CRITERIA: readonly Criterion[] = [
	{
		id: 'ec13',
		text: 'Heart rate within ±10 % or ±5 bpm of the true rate, whichever is greater, in at least 95 % of the readings.',
		source: 'ANSI/AAMI EC13 (heart rate meters), also in IEC 60601-2-27; the share of readings is our reading of it',
		fromMemory: true,
		figure: 'withinEc13',
		limit: 0.95,
		side: 'at least'
	},
	{
		id: 'mape10',
		text: 'Mean absolute percentage error below 10 %.',
		source: 'ANSI/CTA-2065 Physical activity monitoring for heart rate',
		fromMemory: true,
		figure: 'mape',
		limit: 10,
		side: 'at most'
	},
	{
		id: 'mape5-lab',
		text: 'Mean absolute percentage error of at most 5 % in the laboratory.',
		source: 'Validation literature, often used',
		fromMemory: true,
		figure: 'mape',
		limit: 5,
		side: 'at most'
	}
];

export type CriterionResult = {
	met: 'yes' | 'no' | 'cannot tell yet' | 'not determinable';
	value: Figure;
	ci95: Interval | null;
};

/**
 * Is a criterion met? Judged by the whole interval where there is one: `yes` only when all of it meets the limit.
 * A figure without an interval gives "cannot tell yet", never a yes from the point alone.
 */
export function judge(criterion: Criterion, figures: Figures): CriterionResult {
	const value = figures[criterion.figure];
	const ci95 = intervalOfFigure(criterion.figure, figures);
	if (!isDetermined(value)) return { met: 'not determinable', value, ci95 };
	if (ci95 === null || !isDetermined(ci95)) return { met: 'cannot tell yet', value, ci95 };
	const meets = (end: number) => (criterion.side === 'at most' ? end <= criterion.limit : end >= criterion.limit);
	const ends = ci95.map(meets);
	return { met: ends[0] && ends[1] ? 'yes' : ends[0] || ends[1] ? 'cannot tell yet' : 'no', value, ci95 };
}

function intervalOfFigure(figure: Criterion['figure'], f: Figures): Interval | null {
	const intervals: Record<Criterion['figure'], Interval | null> = {
		mape: f.mapeCi95,
		mae: f.maeCi95,
		within5bpm: f.within5bpmCi95,
		within10pct: f.within10pctCi95,
		withinEc13: f.withinEc13Ci95,
		ccc: f.cccCi95
	};
	return intervals[figure];
}
