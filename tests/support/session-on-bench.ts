/** A session with samples, offsets and people of every role, for tests of what happens to it on the server. */
import { createHash } from 'node:crypto';
import { DEFAULT_PLAN, DEFAULT_TAG_KINDS } from '../../src/lib/agreement';
import type { Trace } from '../../src/lib/formats/recording';
import type { Actor } from '../../src/lib/server/auth/actor';
import type { Database } from '../../src/lib/server/db/client';
import { alignments, analysisPlans, members, participants, rawFiles, recordings, sessions, tagKinds, traces, users } from '../../src/lib/server/db/schema';
import type { Role } from '../../src/lib/roles';
import type { ShiftEstimate } from '../../src/lib/signal/shift';
import { simulateSession } from '../../src/lib/simulate';
import { and, eq } from 'drizzle-orm';
import { benchHouse, type BenchHouse } from './bench-house';

export const START_S = Date.UTC(2026, 9, 14, 7, 31) / 1000;
const MINUTES = 12;

export interface SessionOnBench {
	house: BenchHouse;
	/** SO, of the role reviewer. */
	reviewer: Actor;
	/** A second analyst, BV. */
	colleague: Actor;
	sessionId: string;
	/** 0 the strap, 1 and 2 the wearables. */
	recordingIds: string[];
}

/** A further member of the house. */
export async function memberOf(db: Database, house: BenchHouse, initials: string, role: Role): Promise<Actor> {
	const { teamId, teamSlug, teamName } = house.owner;
	const [user] = await db.insert(users).values({ email: `${initials.toLowerCase()}-${teamId}@bramling-bench.example`, name: initials }).returning();
	const [row] = await db.insert(members).values({ teamId, userId: user.id, role, initials }).returning();
	return { userId: user.id, memberId: row.id, teamId, teamSlug, teamName, role, initials };
}

export async function sessionOnBench(db: Database): Promise<SessionOnBench> {
	const house = await benchHouse(db);
	const { teamId } = house.owner;
	await db.insert(tagKinds).values(DEFAULT_TAG_KINDS.map((kind, position) => ({ teamId, ...kind, position })));
	await db.insert(analysisPlans).values({ teamId, studyId: house.study.id, version: 1, body: DEFAULT_PLAN });
	const { sessionId, recordingIds } = await addSession(db, house, 'S01', { reliable: [true, true] });
	return { house, reviewer: await memberOf(db, house, 'SO', 'reviewer'), colleague: await memberOf(db, house, 'BV', 'analyst'), sessionId, recordingIds };
}

/** A session of a strap and two wearables, with proposals that are reliable or not. Worn by P03, or by a participant of another code. */
export async function addSession(db: Database, house: BenchHouse, code: string, { reliable, participant = 'P03' }: { reliable: [boolean, boolean]; participant?: string }): Promise<{ sessionId: string; recordingIds: string[] }> {
	const { teamId } = house.owner;
	const made = simulateSession({
		seed: 7, activity: 'hill-run', startS: START_S, durationS: MINUTES * 60, preset: 'lag', referenceFault: false,
		wearables: [
			{ tauS: 3, windowS: 4, delayS: 1, irregular: false, startsLateS: 5, stopsEarlyS: 5, clockOffsetS: -3 },
			{ tauS: 2, windowS: 4, delayS: 0.5, irregular: true, startsLateS: 2, stopsEarlyS: 20, clockOffsetS: 1 }
		]
	});
	const [wearer] = await db.select().from(participants).where(and(eq(participants.teamId, teamId), eq(participants.code, participant)));
	const [session] = await db
		.insert(sessions)
		.values({ teamId, studyId: house.study.id, code, activity: 'Hill running', participantId: wearer.id, state: reliable.every(Boolean) ? 'aligned' : 'imported', startsAt: new Date(START_S * 1000), endsAt: new Date((START_S + MINUTES * 60) * 1000) })
		.returning();
	const recordingIds: string[] = [];
	for (const [number, heartRate] of [made.reference.heartRate, ...made.wearables.map((w) => w.heartRate)].entries()) {
		const recordingId = await addRecording(db, house, session.id, number, code, heartRate);
		recordingIds.push(recordingId);
		if (number > 0) await db.insert(alignments).values({ teamId, recordingId, version: 1, offsetS: number === 1 ? 3.4237 : -0.51, method: 'proposed', estimate: estimate(number === 1 ? 3.4237 : -0.51, reliable[number - 1]) });
	}
	return { sessionId: session.id, recordingIds };
}

async function addRecording(db: Database, house: BenchHouse, sessionId: string, number: number, code: string, heartRate: Trace): Promise<string> {
	const { teamId, memberId } = house.owner;
	const bytes = new TextEncoder().encode(`${code} ${number}`);
	const [raw] = await db.insert(rawFiles).values({ teamId, sha256: createHash('sha256').update(bytes).digest('hex'), sizeBytes: bytes.length, bytes }).returning();
	const [recording] = await db
		.insert(recordings)
		.values({
			teamId,
			studyId: house.study.id,
			sessionId,
			rawFileId: raw.id,
			fileName: `${code}-${number}.fit`,
			deviceModelId: house.models[number],
			format: 'fit',
			readerVersion: 'test 1',
			device: { maker: null, product: null, serial: null, firmware: null },
			startS: heartRate.tS[0],
			endS: heartRate.tS[heartRate.tS.length - 1],
			uploadedBy: memberId
		})
		.returning();
	await db.insert(traces).values({ recordingId: recording.id, kind: 'heartRate', n: heartRate.tS.length, tS: heartRate.tS, value: heartRate.value });
	return recording.id;
}

const estimate = (bestFitShiftS: number, reliable: boolean): ShiftEstimate => ({
	bestFitShiftS,
	ci95: [bestFitShiftS - 0.4, bestFitShiftS + 0.4],
	reliable,
	reasonCode: reliable ? 'reliable' : 'flat',
	reason: reliable ? 'One peak stands out.' : 'The curve is flat: no offset stands out.',
	candidates: [
		{ shiftS: bestFitShiftS, score: 1 },
		{ shiftS: bestFitShiftS + 40, score: 0.7 }
	],
	clockOffsetS: null,
	clockOffsetCi95: null,
	responseLagS: null
});
