/** What the review page shows: sessions that wait for a decision, and those handed back. */
export interface QueueEntry {
	code: string;
	title: string;
	activity: string | null;
	participantCode: string | null;
	minutes: number;
	round: number;
	handedInBy: string;
	handedInAt: string;
	submitNote: string;
	acceptedTags: number;
	/** Proposals that nobody has settled. */
	openProposals: number;
	/** `to decide`: by you. `with a colleague`: somebody else decides; `why` says why not you. */
	standing: 'to decide' | 'with a colleague' | 'handed back';
	why: string;
	/** Set on what was handed back. */
	decidedBy: string | null;
	decidedAt: string | null;
	comment: string;
	/** You annotate it, handed it in, or wrote in it this round. */
	mine: boolean;
}
