/** One device against another: gap in mean absolute error with an interval over independent sessions or people. */
import { clusterMean, meanInterval, type MeanEstimate } from './cluster-mean';
import { studentCdf } from './distributions';
import { isDetermined, notDeterminable, type Figure, type Interval, type NotDeterminable } from './determinable';
import { holm } from './holm';
import type { AnalysisPlan } from './plan';
import { sessionsByParticipant, type ClusterLevel, type SessionSums } from './sessions';
import { verdictOf, type Verdict } from './verdict';

export interface Comparison {
	/** Error of the second − error of the first, bpm; above 0 = the first is closer. */
	gapBpm: Figure;
	gapCi95: Interval;
	/** Two-sided. */
	p: Figure;
	sessions: number;
	participants: number | null;
	/** Same sessions, or different ones: then more than the device differs. */
	design: 'paired' | 'unpaired';
	verdict: Verdict;
}

export type ComparisonPlan = Pick<AnalysisPlan, 'smallestDifferenceBpm' | 'minSessions' | 'minParticipants'>;

interface Gap {
	session: string;
	participant: string | null;
	gap: number;
	n: number;
}

/**
 * Devices worn in the same sessions: the difference of their mean absolute errors within each session, averaged with
 * the smaller number of pairs as weight.
 *
 * @param first, second sums by session of each device; sessions that only one of them has are left out
 * @param options.cluster what counts as independent; default sessions
 */
export function comparePaired(
	first: readonly SessionSums[],
	second: readonly SessionSums[],
	plan: ComparisonPlan,
	options: { cluster?: ClusterLevel } = {}
): Comparison {
	const key = (s: SessionSums) => JSON.stringify([s.participant, s.session]);
	const partner = new Map(second.filter((s) => s.sums.n > 0).map((s) => [key(s), s]));
	const gaps: Gap[] = [];
	const shared: SessionSums[] = [];
	for (const a of first) {
		const b = partner.get(key(a));
		if (!b || a.sums.n === 0) continue;
		shared.push(a);
		gaps.push({
			session: a.session,
			participant: a.participant,
			gap: b.sums.absolute / b.sums.n - a.sums.absolute / a.sums.n,
			n: Math.min(a.sums.n, b.sums.n)
		});
	}
	const units = options.cluster === 'participant' ? byParticipant(shared, gaps) : gaps;
	const estimate = clusterMean(units.map((g) => ({ mean: g.gap, n: g.n })));
	const counts = { sessions: gaps.length, participants: peopleIn(shared) };
	if ('notDeterminable' in estimate) {
		const reason = gaps.length ? estimate : notDeterminable('The two devices share no session.');
		return {
			gapBpm: gaps.length ? gaps[0].gap : reason,
			gapCi95: reason,
			p: reason,
			...counts,
			design: 'paired',
			verdict: verdictOf(reason, counts, plan)
		};
	}
	return finished(estimate, counts, 'paired', plan);
}

/**
 * Devices worn in different sessions: difference of two means with Welch's degrees of freedom. Activities, days and
 * people may differ too; say so beside it.
 */
export function compareUnpaired(
	first: readonly SessionSums[],
	second: readonly SessionSums[],
	plan: ComparisonPlan,
	options: { cluster?: ClusterLevel } = {}
): Comparison {
	const side = (sessions: readonly SessionSums[]) => {
		const used = sessions.filter((s) => s.sums.n > 0);
		const groups = options.cluster === 'participant' ? sessionsByParticipant(used) : used.map((s) => [s]);
		return clusterMean(
			groups.map((group) => {
				const n = group.reduce((sum, s) => sum + s.sums.n, 0);
				return { mean: group.reduce((sum, s) => sum + s.sums.absolute, 0) / n, n };
			})
		);
	};
	const [a, b] = [side(first), side(second)];
	const counts = { sessions: Math.min(first.length, second.length), participants: peopleIn([...first, ...second]) };
	const missing = (reason: NotDeterminable): Comparison => ({
		gapBpm: reason,
		gapCi95: reason,
		p: reason,
		...counts,
		design: 'unpaired',
		verdict: verdictOf(reason, counts, plan)
	});
	if ('notDeterminable' in a) return missing(a);
	if ('notDeterminable' in b) return missing(b);
	const [va, vb] = [a.standardError ** 2, b.standardError ** 2];
	return finished(
		{
			mean: b.mean - a.mean,
			standardError: Math.sqrt(va + vb),
			df: (va + vb) ** 2 / (va ** 2 / a.df + vb ** 2 / b.df) || 1
		},
		counts,
		'unpaired',
		plan
	);
}

/** Adjust the p values of several comparisons by Holm; those that are not determinable are not counted. */
export function adjustComparisons(comparisons: readonly Comparison[]): Figure[] {
	const known = comparisons.flatMap((c, i) => (isDetermined(c.p) ? [{ i, p: c.p }] : []));
	const adjusted = holm(known.map((k) => k.p));
	const result: Figure[] = comparisons.map((c) => c.p);
	known.forEach((k, rank) => (result[k.i] = adjusted[rank]));
	return result;
}

function byParticipant(shared: readonly SessionSums[], gaps: readonly Gap[]): { gap: number; n: number }[] {
	const gapOf = new Map(shared.map((s, i) => [s, gaps[i]]));
	return sessionsByParticipant(shared).map((group) => {
		const own = group.flatMap((s) => gapOf.get(s) ?? []);
		const n = own.reduce((sum, g) => sum + g.n, 0);
		return { gap: own.reduce((sum, g) => sum + g.gap * g.n, 0) / n, n };
	});
}

function finished(
	estimate: MeanEstimate,
	counts: { sessions: number; participants: number | null },
	design: Comparison['design'],
	plan: ComparisonPlan
): Comparison {
	const gapCi95 = meanInterval(estimate);
	return {
		gapBpm: estimate.mean,
		gapCi95,
		p:
			estimate.standardError > 0
				? 2 * studentCdf(-Math.abs(estimate.mean) / estimate.standardError, estimate.df)
				: notDeterminable('The sessions do not differ at all.'),
		...counts,
		design,
		verdict: verdictOf(gapCi95, counts, plan)
	};
}

function peopleIn(sessions: readonly SessionSums[]): number | null {
	return sessions.some((s) => s.participant === null) ? null : new Set(sessions.map((s) => s.participant)).size;
}
