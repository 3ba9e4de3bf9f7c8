/** One engine: the figures that the page shows are the server's, and the study's, to the last digit. */
import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { agreementFigures } from '../../src/lib/agreement';
import { sessionAgreement, type SessionAgreement } from '../../src/lib/server/session/agreement';
import { saveAlignment } from '../../src/lib/server/session/alignment';
import { sessionDocumentById } from '../../src/lib/server/session/document';
import { saveTag } from '../../src/lib/server/session/tag';
import { sessionTraces } from '../../src/lib/server/session/traces';
import { loadSessions, studyBasis } from '../../src/lib/server/results/load-sessions';
import { sessionPairs } from '../../src/lib/server/results/session-pairs';
import { groupOf } from '../../src/lib/server/results/study-agreement';
import { nudge, setKind } from '../../src/lib/timeline/commands';
import { draftBetween } from '../../src/lib/timeline/commands/edge';
import { FigureMemory, liveFigures, type WearableFigures } from '../../src/lib/timeline/figures';
import type { SessionDocument } from '../../src/lib/timeline/model';
import { openState, type EditorState } from '../../src/lib/timeline/state';
import { decodeTraceColumns, encodeTraceColumns } from '../../src/lib/timeline/trace-columns';
import { applyTransaction, type Command } from '../../src/lib/timeline/transaction';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { sessionOnBench, START_S, type SessionOnBench } from '../support/session-on-bench';

let database: FreshDatabase;
let on: SessionOnBench;
beforeAll(async () => {
	database = await freshDatabase();
	on = await sessionOnBench(database.db);
});
afterAll(() => database.drop());

/** As it goes over the wire. JSON writes every number so that it reads back the same. */
const overTheWire = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T;
const shown = (w: WearableFigures): SessionAgreement['wearables'][number] => ({ number: w.number, name: w.name, primary: w.primary, cleaned: w.cleaned, counts: w.table?.counts ?? null, why: w.why, counted: w.counted });

/** What the page holds after loading: the document through JSON, the samples through their columns. */
async function pageState(): Promise<EditorState> {
	const { db } = database;
	const document: SessionDocument = overTheWire(await sessionDocumentById(db, on.house.analyst, on.sessionId));
	const bytes = encodeTraceColumns(await sessionTraces(db, on.house.analyst, on.sessionId));
	return openState(document, decodeTraceColumns(bytes.buffer));
}
const run = (state: EditorState, ...commands: Command[]): EditorState => {
	let now = state;
	for (const command of commands) command(now, (t) => (now = applyTransaction(now, t, 0)));
	return now;
};

describe('figures of a session', () => {
	it('are the same in the page, on the server and in the study, before and after edits', async () => {
		const { db } = database;
		const { analyst } = on.house;
		const loaded = await pageState();
		const before = overTheWire(await sessionAgreement(db, analyst, on.sessionId));
		expect(overTheWire(liveFigures(loaded, new FigureMemory()).map(shown))).toEqual(before.wearables);
		expect(before.wearables[0].primary?.n).toBeGreaterThan(500);

		const edited = run(loaded, nudge(0.1), draftBetween(on.recordingIds[1], START_S + 100.5, START_S + 190.25), setKind('half-rate'), draftBetween(on.recordingIds[0], START_S + 300, START_S + 330), setKind('reference-fault'));
		const [watch, band] = [edited.alignments[on.recordingIds[1]], edited.tags];
		await saveAlignment(db, analyst, on.recordingIds[1], 1, { offsetS: watch.offsetS, driftPpm: watch.driftPpm, locked: watch.locked, method: watch.method });
		for (const { recordingId, kind, startS, endS, status, cleanedOverride, note } of band) await saveTag(db, analyst, on.sessionId, randomUUID(), 0, { recordingId, kind, startS, endS, status, cleanedOverride, note });

		const after = overTheWire(await sessionAgreement(db, analyst, on.sessionId));
		const live = overTheWire(liveFigures(edited, new FigureMemory()).map(shown));
		expect(after.wearables).toEqual(live);
		expect(after.wearables[0].primary).not.toEqual(before.wearables[0].primary);
		expect(after.wearables[0].cleaned?.n).toBeLessThan(after.wearables[0].primary?.n ?? 0);
		expect(overTheWire(liveFigures(await pageState(), new FigureMemory()).map(shown))).toEqual(after.wearables);

		const basis = await studyBasis(db, analyst, on.house.study.id);
		const [session] = await loadSessions(db, analyst, on.house.study.id, { sessionIds: [on.sessionId] });
		const study = sessionPairs(session, basis).map((pairs) => ({
			number: pairs.track.number,
			primary: agreementFigures([groupOf(pairs, 'primary')], { plan: basis.plan }),
			cleaned: agreementFigures([groupOf(pairs, 'cleaned')], { plan: basis.plan })
		}));
		expect(overTheWire(study)).toEqual(after.wearables.map(({ number, primary, cleaned }) => ({ number, primary, cleaned })));
	});

	it('are for those whose role reads them', async () => {
		await expect(sessionAgreement(database.db, on.house.contributor, on.sessionId)).rejects.toThrow('does not include');
		await expect(sessionAgreement(database.db, on.house.stranger, on.sessionId)).rejects.toThrow('not here');
	});
});
