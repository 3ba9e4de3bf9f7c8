/** The heavy, pure part of background work: reading files and searching offsets. */
import type { Reading, Trace } from '../../formats/recording';
import type { ShiftEstimate } from '../../signal/shift';

/** One file as it was read. An archive gives several. */
export interface ReadEntry {
	/** Name inside the archive, or the uploaded file's own. */
	fileName: string;
	/** The entry's own bytes; null when the upload is the file itself. */
	bytes: Uint8Array | null;
	reading: Reading;
}

export interface Engine {
	read(bytes: Uint8Array, fileName: string): Promise<ReadEntry[]>;
	estimateShift(reference: Trace, wearable: Trace): Promise<ShiftEstimate>;
}

/** The engine had to be stopped: this input, tried again, would do the same. */
export class EngineStopped extends Error {
	constructor(
		readonly code: 'took-too-long' | 'needed-too-much-memory',
		message: string
	) {
		super(message);
		this.name = 'EngineStopped';
	}
}
