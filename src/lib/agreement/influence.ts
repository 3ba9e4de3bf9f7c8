/** What the headline hangs on: each session left out in turn, and how many more sessions an answer needs. */
import type { MeanEstimate } from './cluster-mean';
import { studentQuantile } from './distributions';
import { notDeterminable, type Figure, type NotDeterminable } from './determinable';
import { joinSessions, type SessionSums } from './sessions';
import { leaveOneOut, mergeMoments, type PairMoments } from './sums';

export interface Influence {
	session: string;
	participant: string | null;
	/** The figure without this session, and how far that is from the figure with it. */
	without: Figure;
	change: Figure;
}

/**
 * The figure without each session, the one that moves it most first.
 * @param statistic for example `meanAbsoluteError`
 */
export function sessionInfluence(sessions: readonly SessionSums[], statistic: (m: PairMoments) => Figure): Influence[] {
	const used = joinSessions(sessions).filter((s) => s.sums.n > 0);
	const sums = used.map((s) => s.sums);
	const whole = statistic(mergeMoments(sums));
	const rows = leaveOneOut(sums).map((rest, i): Influence => {
		const without = statistic(rest);
		const change =
			typeof without === 'number' && typeof whole === 'number'
				? without - whole
				: notDeterminable('Without this session the figure is not determinable.');
		return { session: used[i].session, participant: used[i].participant, without, change };
	});
	const size = (row: Influence) => (typeof row.change === 'number' ? Math.abs(row.change) : Infinity);
	return rows.sort((a, b) => size(b) - size(a));
}

/**
 * How many sessions in all would bring the 95 % interval of a mean to ± `halfWidthBpm`, when further sessions are like
 * those recorded: the smallest k with t(k − 1) · s / √k ≤ half-width.
 *
 * @param estimate the mean over sessions so far
 * @param sessions how many there are
 * @returns total number of sessions (not fewer than there are), or the reason why it cannot be said
 */
export function sessionsNeeded(
	estimate: MeanEstimate | NotDeterminable,
	sessions: number,
	halfWidthBpm: number
): Figure {
	if ('notDeterminable' in estimate) return estimate;
	if (!(halfWidthBpm > 0)) return notDeterminable('The half-width must be above 0.');
	const spread = estimate.standardError * Math.sqrt(sessions);
	const enough = (k: number) => (studentQuantile(0.975, k - 1) * spread) / Math.sqrt(k) <= halfWidthBpm;
	if (enough(Math.max(2, sessions))) return sessions;
	let high = Math.max(2, sessions) * 2;
	while (!enough(high)) {
		high *= 2;
		if (high > 1e6) return notDeterminable('More than a million sessions: the half-width is out of reach.');
	}
	let low = high / 2;
	while (high - low > 1) {
		const middle = Math.floor((low + high) / 2);
		if (enough(middle)) high = middle;
		else low = middle;
	}
	return high;
}
