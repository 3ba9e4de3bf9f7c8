/** What the agreement page shows for one device: figures, plots on axes that all devices share, and the limits in words. */
import type { DeviceAgreement } from '../../results/agreement-view';
import { agreementSentence, limitsInWords } from '../../results/sentences';
import type { Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import { notFound } from '../errors';
import { isAligned, sessionPairs } from './session-pairs';
import { deviceAgreement } from './study-agreement';
import { studyPairs, type Include } from './study-pairs';

export interface AgreementPage {
	device: DeviceAgreement | null;
	/** Sentence that opens the page, and notes on what the figures rest on. */
	sentence: string;
	notes: string[];
	/** Why there is nothing to show. */
	why: string;
	/** The same axes for every device of the study and for both analyses. */
	rangeBpm: [number, number];
	differenceRangeBpm: number;
	activities: string[];
	participants: string[];
	alignedSessions: number;
}

/** Half height of the difference axis, bpm: a larger difference touches the edge. */
const DIFFERENCE_RANGE_BPM = 60;

export async function agreementPage(
	db: Queryable,
	actor: Actor,
	study: { id: string; activities: string[] },
	devices: { number: number; name: string }[],
	filter: { include: Include; activity: string | null; participant: string | null },
	wanted: string | null
): Promise<AgreementPage> {
	const wearables = devices.filter((d) => d.number > 0);
	const chosen = wanted === null ? wearables[0] : wearables.find((d) => String(d.number) === wanted);
	if (wanted !== null && !chosen) throw notFound(`Device ${wanted} of this study`);
	const { basis, sessions, pairs } = await studyPairs(db, actor, study.id, filter);
	const own = chosen ? pairs.filter((p) => p.track.number === chosen.number && p.table.n > 0) : [];
	const device = chosen ? deviceAgreement(chosen, own, basis, study.activities) : null;

	// The axes come from all readings of the study, not from what is shown now: they stay where they are.
	const everything = sessions.flatMap((s) => sessionPairs(s, basis));
	let low = Infinity;
	let high = -Infinity;
	for (const { table } of everything)
		for (let i = 0; i < table.n; i++) {
			low = Math.min(low, table.reference[i]);
			high = Math.max(high, table.reference[i]);
		}
	const rangeBpm: [number, number] = low <= high ? [Math.max(30, Math.floor((low - 15) / 10) * 10), Math.min(230, Math.ceil((high + 10) / 10) * 10)] : [50, 200];

	const aligned = sessions.filter((s) => s.reference && s.wearables.some(isAligned));
	return {
		device,
		sentence: device ? agreementSentence(device) : '',
		notes: device ? limitsInWords(device, { plan: basis.plan, planVersion: basis.planVersion, include: filter.include }) : [],
		why: whyNothing(chosen?.name ?? null, filter, sessions.length, aligned.length),
		rangeBpm,
		differenceRangeBpm: DIFFERENCE_RANGE_BPM,
		activities: [...new Set([...study.activities, ...sessions.flatMap((s) => (s.activity ? [s.activity] : []))])],
		participants: [...new Set(sessions.flatMap((s) => (s.participantCode ? [s.participantCode] : [])))].sort(),
		alignedSessions: aligned.length
	};
}

function whyNothing(device: string | null, filter: { include: Include; activity: string | null; participant: string | null }, sessions: number, aligned: number): string {
	if (device === null) return 'This study has no wearable yet. Add one on the plan page.';
	if (sessions === 0) return 'No session yet. Bring in the strap file and the wearables’ files of one training session.';
	if (filter.activity || filter.participant) return `No pair of ${device} fits this choice of activity and participant. Widen the choice.`;
	if (aligned === 0) return 'No session is aligned yet, so nothing can be compared. Open a session and place its offsets.';
	if (filter.include === 'reviewed') return `No reviewed session holds pairs of ${device} yet. Figures appear once a teammate has vouched for a session.`;
	return `No aligned session holds pairs of ${device}.`;
}
