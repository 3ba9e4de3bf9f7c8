/** A small session for the editor's tests: a strap and two wearables of ten minutes, with known offsets and tags. */
import { DEFAULT_PLAN } from '../../agreement/plan';
import { DEFAULT_TAG_KINDS } from '../../agreement/tag-kinds';
import type { Trace } from '../../formats/recording';
import type { ShiftEstimate } from '../../signal/shift';
import type { AlignmentState, SessionDocument, Tag } from '../model';
import { openState, type EditorState } from '../state';
import { applyTransaction, type Command } from '../transaction';

/** 14 October 2026, 07:00:00 UTC. */
export const START_S = Date.UTC(2026, 9, 14, 7) / 1000;
export const LENGTH_S = 600;

export const estimate = (bestFitShiftS: number, reliable = true): ShiftEstimate => ({
	bestFitShiftS,
	ci95: [bestFitShiftS - 0.3, bestFitShiftS + 0.3],
	reliable,
	reasonCode: reliable ? 'reliable' : 'flat',
	reason: reliable ? 'One peak stands out.' : 'The curve is flat: no offset stands out.',
	candidates: [{ shiftS: bestFitShiftS, score: 1 }],
	clockOffsetS: null,
	clockOffsetCi95: null,
	responseLagS: null
});

export const alignment = (offsetS: number, more: Partial<AlignmentState> = {}): AlignmentState => ({
	version: 1,
	offsetS,
	driftPpm: 0,
	locked: false,
	method: 'proposed',
	estimate: estimate(offsetS),
	...more
});

export const tag = (id: string, startS: number, endS: number, more: Partial<Tag> = {}): Tag => ({
	id,
	version: 1,
	recordingId: 'wrenna',
	kind: 'cadence-lock',
	startS: START_S + startS,
	endS: START_S + endS,
	status: 'accepted',
	cleanedOverride: null,
	evidence: '',
	note: '',
	authorInitials: 'RT',
	...more
});

/** One reading a second; a slow wave, so that traces can be told apart when they are shifted. */
export function heartRate(shiftS: number, addBpm: number): Trace {
	const tS = Float64Array.from({ length: LENGTH_S + 1 }, (_, i) => START_S + i - shiftS);
	return { kind: 'heartRate', tS, value: tS.map((_, i) => Math.round(140 + 25 * Math.sin(i / 40) + addBpm)) };
}

const track = (recordingId: string, number: number, name: string) => ({
	recordingId,
	number,
	role: number === 0 ? ('reference' as const) : ('wearable' as const),
	name,
	shortName: name.split(' ')[0],
	firmware: '1.0',
	fileName: `${recordingId}.fit`,
	warnings: []
});

export function sessionDocument(more: Partial<SessionDocument> = {}): SessionDocument {
	return {
		sessionId: '4b3c1a50-0000-4000-8000-000000000001',
		studyId: '4b3c1a50-0000-4000-8000-000000000002',
		studySlug: 'autumn',
		studyTitle: 'Autumn trail study',
		code: 'S01',
		title: '',
		activity: 'Hill running',
		participantCode: 'P03',
		state: 'annotating',
		startsAtS: START_S,
		endsAtS: START_S + LENGTH_S,
		tracks: [track('halden', 0, 'Halden ECG strap'), track('wrenna', 1, 'Wrenna Loop 2'), track('ostrel', 2, 'Ostrel Band')],
		alignments: { wrenna: alignment(3), ostrel: alignment(0) },
		tags: [],
		kinds: DEFAULT_TAG_KINDS,
		plan: DEFAULT_PLAN,
		reviews: [],
		can: { align: true, annotate: true, submit: true, review: false, takeBack: false, reopen: false },
		me: { initials: 'RT', role: 'analyst' },
		previousCode: null,
		nextCode: null,
		...more
	};
}

export const sessionTraces = (): Map<string, Trace[]> =>
	new Map([
		['halden', [heartRate(0, 0)]],
		['wrenna', [heartRate(3, 6)]],
		['ostrel', [heartRate(0, -2)]]
	]);

export function session(more: Partial<SessionDocument> = {}, patch: Partial<EditorState> = {}): EditorState {
	return { ...openState(sessionDocument(more), sessionTraces()), ...patch };
}

/** The state after commands, each a second after the other unless `stepMs` says otherwise. */
export function after(state: EditorState, commands: Command[], stepMs = 60_000): EditorState {
	let now = state;
	commands.forEach((command, i) => command(now, (transaction) => (now = applyTransaction(now, transaction, i * stepMs))));
	return now;
}

/** Seconds after the session's start, for times on the axis. */
export const sinceStart = (axisS: number): number => Math.round((axisS - START_S) * 1000) / 1000;
