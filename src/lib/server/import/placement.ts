/**
 * Which session a recording belongs to, by the times that the clocks state.
 *
 * A recording belongs to a session when their spans overlap by at least half of the shorter one. It never joins a
 * session of another wearer, a session that already holds a recording of the same device, or one whose review has
 * begun: those are questions for a person.
 */
import type { ImportQuestion } from '../../import/question';
import { FARTHEST_ZONE_SHIFT_S, ZONE_STEP_S } from '../../import/zone';

export interface Span {
	startS: number;
	endS: number;
}

/** What has to be known of a session to decide whether a recording goes in. */
export interface SessionSlot {
	sessionId: string;
	code: string;
	span: Span;
	participantId: string | null;
	/** In review or reviewed: nothing may be added unseen. */
	closed: boolean;
	deviceModelIds: string[];
}

export interface RecordingToPlace {
	span: Span;
	deviceModelId: string;
	/** The wearer, when the file or the uploader says so. */
	participantId: string | null;
	/** A contributor's file goes to sessions of that wearer only, never to one without a wearer. */
	ownSessionsOnly: boolean;
}

export type Placement =
	| { kind: 'join'; slot: SessionSlot; share: number }
	| { kind: 'new' }
	| { kind: 'ask'; question: ImportQuestion; slots: SessionSlot[] };

const LEAST_OVERLAP_SHARE = 0.5;

/** Seconds that two spans have in common, 0 when they do not meet. */
function overlapS(a: Span, b: Span): number {
	return Math.max(0, Math.min(a.endS, b.endS) - Math.max(a.startS, b.startS));
}

/** Overlap as a share of the shorter span, 0 to 1. A span without length counts as inside or outside. */
export function overlapShare(a: Span, b: Span): number {
	const shorterS = Math.min(a.endS - a.startS, b.endS - b.startS);
	if (shorterS <= 0) return Math.min(a.endS, b.endS) >= Math.max(a.startS, b.startS) ? 1 : 0;
	return overlapS(a, b) / shorterS;
}

/** The session that a recording joins, a new one, or the question to ask. */
export function placeRecording(recording: RecordingToPlace, sessions: readonly SessionSlot[]): Placement {
	const near = sessions
		.filter((s) => sameWearerPossible(recording, s))
		.map((slot) => ({ slot, share: overlapShare(recording.span, slot.span) }))
		.filter((c) => c.share >= LEAST_OVERLAP_SHARE)
		.sort((a, b) => b.share - a.share);
	if (near.length === 0) return { kind: 'new' };

	const open = near.filter((c) => !c.slot.closed && !c.slot.deviceModelIds.includes(recording.deviceModelId));
	// A wearer named on both sides settles it before any share does.
	const named = open.filter((c) => recording.participantId !== null && c.slot.participantId === recording.participantId);
	const fitting = named.length > 0 ? named : open;
	if (fitting.length === 1) return { kind: 'join', slot: fitting[0].slot, share: fitting[0].share };
	if (fitting.length > 1) {
		const slots = fitting.map((c) => c.slot);
		return { kind: 'ask', question: { code: 'which-session', sessionIds: slots.map((s) => s.sessionId) }, slots };
	}
	const taken = near.find((c) => !c.slot.closed) ?? near[0];
	const { slot } = taken;
	return slot.deviceModelIds.includes(recording.deviceModelId)
		? { kind: 'ask', question: { code: 'device-twice', sessionId: slot.sessionId, deviceModelId: recording.deviceModelId }, slots: [slot] }
		: { kind: 'ask', question: { code: 'session-closed', sessionId: slot.sessionId }, slots: [slot] };
}

function sameWearerPossible(recording: RecordingToPlace, slot: SessionSlot): boolean {
	if (recording.ownSessionsOnly) return slot.participantId !== null && slot.participantId === recording.participantId;
	return recording.participantId === null || slot.participantId === null || recording.participantId === slot.participantId;
}

/**
 * A session's span: the reference's when there is one; else the union of the recordings that stand together in
 * time, begun with the longest (a recording filed by hand may state a clock hours away and does not stretch it).
 */
export function sessionSpan(recordings: readonly (Span & { isReference: boolean })[]): Span | null {
	const reference = recordings.find((r) => r.isReference);
	if (reference) return { startS: reference.startS, endS: reference.endS };
	const byLength = [...recordings].sort((a, b) => b.endS - b.startS - (a.endS - a.startS));
	let span: Span | null = null;
	for (const r of byLength) {
		if (span === null) span = { startS: r.startS, endS: r.endS };
		else if (overlapShare(span, r) > 0) span = { startS: Math.min(span.startS, r.startS), endS: Math.max(span.endS, r.endS) };
	}
	return span;
}

/**
 * May the recording be of this session with its clock set to another zone? True when some shift by whole or half
 * hours, none at all excepted, brings at least 80 % of the shorter one inside the other and neither is more than twice as long.
 */
export function zoneMistakePossible(recording: Span, session: Span): boolean {
	const lengthS = recording.endS - recording.startS;
	const sessionLengthS = session.endS - session.startS;
	if (Math.max(lengthS, sessionLengthS) > 2 * Math.min(lengthS, sessionLengthS)) return false;
	const nearest = Math.round((session.startS - recording.startS) / ZONE_STEP_S);
	return [nearest - 1, nearest, nearest + 1].some((steps) => {
		const shiftS = steps * ZONE_STEP_S;
		if (steps === 0 || Math.abs(shiftS) > FARTHEST_ZONE_SHIFT_S) return false;
		return overlapShare({ startS: recording.startS + shiftS, endS: recording.endS + shiftS }, session) >= 0.8;
	});
}
