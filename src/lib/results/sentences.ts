/**
 * Sentences that figures allow, by fixed rules: what stands first on the agreement page, and what the figures rest on.
 * Nothing here is said that the numbers beside it do not say.
 */
import type { AnalysisPlan } from '../agreement/plan';
import { fixed, signed } from '../text/figures';
import type { DeviceAgreement } from './agreement-view';

/** The opening sentence of a device's agreement: bias with its direction, limits, and where they are widest. */
export function agreementSentence(device: DeviceAgreement): string {
	const { bias, lower, upper, n, sessions } = device.figures.primary;
	if (n === 0 || bias.value === null) return '';
	const rounded = fixed(Math.abs(bias.value), 1);
	const parts = [
		rounded === '0.0' ? 'Reads neither high nor low on average.' : `Reads ${rounded} bpm ${bias.value < 0 ? 'low' : 'high'} on average.`
	];
	if (lower.value !== null && upper.value !== null)
		parts.push(`95 % of readings are expected between ${signed(lower.value, 0)} and ${signed(upper.value, 0)} bpm of the strap.`);
	else parts.push(`Limits of agreement are not determinable from ${sessions === 1 ? 'one session' : `${sessions} sessions`}.`);
	const widest = widestActivity(device);
	if (widest) parts.push(`Its limits are widest in ${widest.toLowerCase()}.`);
	return parts.join(' ');
}

/** The activity with the widest limits, when at least two have limits. */
function widestActivity(device: DeviceAgreement): string | null {
	const withLimits = device.byActivity.flatMap(({ activity, figures: { primary } }) =>
		primary.lower.value === null || primary.upper.value === null ? [] : [{ activity, width: primary.upper.value - primary.lower.value }]
	);
	if (withLimits.length < 2) return null;
	return withLimits.reduce((a, b) => (b.width > a.width ? b : a)).activity;
}

/** What the figures rest on and what they cannot say, one sentence each. */
export function limitsInWords(
	device: DeviceAgreement,
	basis: { plan: AnalysisPlan; planVersion: number; include: 'reviewed' | 'aligned' }
): string[] {
	const { plan } = basis;
	const { sessions, participants, coverage } = device.figures.primary;
	const notes: string[] = [];
	if (basis.include === 'aligned') notes.push('Sessions that nobody has reviewed yet are counted too: these figures may still move.');
	if (sessions < plan.minSessions || participants < plan.minParticipants)
		notes.push(
			`No verdict: the plan asks for at least ${plan.minSessions} sessions and ${plan.minParticipants} wearers; here are ${count(sessions, 'session')} and ${count(participants, 'wearer')}.`
		);
	if (participants === 1) notes.push('One wearer only: these figures say little about other people.');
	if (coverage.value !== null && coverage.value * 100 < plan.minCoveragePct)
		notes.push(`Coverage is ${fixed(coverage.value * 100, 0)} %, below the plan's ${plan.minCoveragePct} %: a device that falls silent when unsure looks better than it is.`);
	if (device.firmwares.length > 1) notes.push(`Several firmware versions are mixed here: ${device.firmwares.join(', ')}.`);
	notes.push(
		'Small figures below a value are its 95 % confidence interval, with sessions taken as independent. Limits allow for repeated readings within a session. Primary counts every paired reading except where the reference is at fault; cleaned leaves out accepted segments by the plan.'
	);
	notes.push(
		`Plan version ${basis.planVersion}: ${plan.gridS === 'per-sample' ? "pairs at the wearable's own readings" : `one pair every ${plan.gridS} s`}, ${plan.pairing.method === 'interpolate' ? `gaps of at most ${plan.pairing.maxGapS} s bridged by a straight line` : `nearest reading within ${plan.pairing.toleranceS} s`}. Traces stand where the analyst placed them by the best fit of heart rate: a response that is merely late is forgiven.`
	);
	return notes;
}

const count = (n: number, word: string) => `${n} ${word}${n === 1 ? '' : 's'}`;
