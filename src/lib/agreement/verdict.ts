/** Words for a difference between two devices, by fixed rules from the interval, never from the point alone. */
import { isDetermined, type Interval } from './determinable';
import type { AnalysisPlan } from './plan';

export const VERDICTS = {
	'clearly-closer': 'clearly closer',
	'too-small-to-matter': 'too small a difference to matter',
	'closer-perhaps-by-little': 'closer, perhaps by little',
	'cannot-tell-yet': 'cannot tell yet',
	'no-difference-that-matters': 'no difference that matters',
	'no-verdict': 'no verdict'
} as const;

export interface Verdict {
	code: keyof typeof VERDICTS;
	words: (typeof VERDICTS)[keyof typeof VERDICTS];
	/** Which device the words favour, where they favour one. */
	closer: 'first' | 'second' | null;
	/** Why there is no verdict, or null. */
	reason: string | null;
}

/**
 * Verdict on a gap in error between two devices, e.g. MAE of the second − MAE of the first, bpm.
 *
 * With m the smallest difference that matters and the interval turned so that its closer device leads (lo > 0):
 * lo > m "clearly closer"; hi ≤ m "too small a difference to matter"; else "closer, perhaps by little". An interval
 * that holds 0: inside ± m "no difference that matters", else "cannot tell yet". Below the plan's minimum of sessions
 * or people: no verdict.
 *
 * @param gap interval of the gap, bpm; above 0 = the first device is closer
 */
export function verdictOf(
	gap: Interval,
	counts: { sessions: number; participants: number | null },
	plan: Pick<AnalysisPlan, 'smallestDifferenceBpm' | 'minSessions' | 'minParticipants'>
): Verdict {
	const none = (reason: string): Verdict => ({
		code: 'no-verdict',
		words: VERDICTS['no-verdict'],
		closer: null,
		reason
	});
	if (!isDetermined(gap)) return none(gap.notDeterminable);
	if (counts.sessions < plan.minSessions)
		return none(
			`${counts.sessions} sessions; the plan asks for at least ${plan.minSessions} before it says anything in words.`
		);
	if (counts.participants !== null && counts.participants < plan.minParticipants)
		return none(
			`${counts.participants} ${counts.participants === 1 ? 'person' : 'people'}; the plan asks for at least ${plan.minParticipants} before it says anything in words.`
		);
	const m = plan.smallestDifferenceBpm;
	const say = (code: keyof typeof VERDICTS, closer: Verdict['closer'] = null): Verdict => ({
		code,
		words: VERDICTS[code],
		closer,
		reason: null
	});
	const [low, high] = gap[0] > 0 ? gap : gap[1] < 0 ? [-gap[1], -gap[0]] : gap;
	if (low > 0) {
		const closer = gap[0] > 0 ? 'first' : 'second';
		if (low > m) return say('clearly-closer', closer);
		return high <= m ? say('too-small-to-matter', closer) : say('closer-perhaps-by-little', closer);
	}
	return low >= -m && high <= m ? say('no-difference-that-matters') : say('cannot-tell-yet');
}
