/** One measured claim: ours against a rival in the same run. */
export interface BenchRow {
	name: string;
	/** Median time of ours, ms. */
	ours_ms: number;
	/** What ours is compared with, or what it is measured alone. */
	rival: string;
	/** Median time of the rival, ms; null where there is none. */
	rival_ms: number | null;
	/** ours / rival; null where there is no rival. */
	ratio: number | null;
}
