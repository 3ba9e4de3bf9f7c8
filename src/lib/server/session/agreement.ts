/** Figures of one session from what is stored: the same function over the same parts as in the page. */
import { authorise, type Actor } from '../auth/actor';
import type { Queryable } from '../db/client';
import type { Figures, PairCounts } from '../../agreement';
import { FigureMemory, liveFigures } from '../../timeline/figures';
import { openState } from '../../timeline/state';
import { sessionDocumentById } from './document';
import { sessionTraces } from './traces';

interface WearableAgreement {
	number: number;
	name: string;
	/** Null when nothing can be paired; `why` says the reason. */
	primary: Figures | null;
	cleaned: Figures | null;
	counts: PairCounts | null;
	why: string;
	/** Whether the study counts them. */
	counted: boolean;
}

export interface SessionAgreement {
	session: string;
	planVersion: number;
	wearables: WearableAgreement[];
}

/** @throws DomainError not-found or not-allowed */
export async function sessionAgreement(db: Queryable, actor: Actor, sessionId: string): Promise<SessionAgreement> {
	authorise(actor, 'agreement.read');
	const document = await sessionDocumentById(db, actor, sessionId);
	const traces = await sessionTraces(db, actor, sessionId);
	const state = openState(document, new Map(traces.map((r) => [r.recordingId, r.traces])));
	return {
		session: document.code,
		planVersion: document.plan.version,
		wearables: liveFigures(state, new FigureMemory()).map(({ number, name, primary, cleaned, table, why, counted }) => ({ number, name, primary, cleaned, counts: table?.counts ?? null, why, counted }))
	};
}
