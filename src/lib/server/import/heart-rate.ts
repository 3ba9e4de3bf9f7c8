/** The heart-rate trace of a recording. */
import { and, eq } from 'drizzle-orm';
import type { Trace } from '../../formats/recording';
import type { Queryable } from '../db/client';
import { traces } from '../db/schema';

/** Null when the recording is gone. */
export async function heartRateOf(db: Queryable, recordingId: string): Promise<Trace | null> {
	const [trace] = await db
		.select({ tS: traces.tS, value: traces.value })
		.from(traces)
		.where(and(eq(traces.recordingId, recordingId), eq(traces.kind, 'heartRate')));
	return trace ? { kind: 'heartRate', ...trace } : null;
}
