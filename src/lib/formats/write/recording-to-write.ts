/** What the writers need of a recording: its traces, and what is known about the device and the activity. */
import type { ChannelKind, RecordedDevice, Trace } from '../recording';

export interface RecordingToWrite {
	device: RecordedDevice;
	/** `running`, `cycling`, …, or null. */
	activity: string | null;
	traces: Pick<Trace, 'kind' | 'tS' | 'value'>[];
}

/** One moment with the values that stand at exactly that time. */
export interface WriteRow {
	tS: number;
	values: Partial<Record<ChannelKind, number>>;
}

/**
 * Traces joined to rows by equal time stamps, RR intervals apart.
 *
 * @returns rows in order of time and the RR trace, if there is one
 */
export function rowsToWrite(recording: RecordingToWrite): {
	rows: WriteRow[];
	intervals: Pick<Trace, 'tS' | 'value'> | null;
} {
	const byTime = new Map<number, WriteRow>();
	let intervals: Pick<Trace, 'tS' | 'value'> | null = null;
	for (const trace of recording.traces) {
		if (trace.kind === 'rrInterval') {
			intervals = trace;
			continue;
		}
		for (let i = 0; i < trace.tS.length; i++) {
			let row = byTime.get(trace.tS[i]);
			if (!row) {
				row = { tS: trace.tS[i], values: {} };
				byTime.set(trace.tS[i], row);
			}
			row.values[trace.kind] = trace.value[i];
		}
	}
	return { rows: [...byTime.values()].sort((a, b) => a.tS - b.tS), intervals };
}
