/** The engine in the caller's own thread: for the command line, demo content and tests, and inside the engine threads. */
import { readFile } from '../../formats';
import { estimateBestFitShift } from '../../signal';
import type { Engine } from './engine';

export const engine: Engine = {
	read: async (bytes, fileName) => [{ fileName, bytes: null, reading: readFile(bytes, fileName) }],
	estimateShift: async (reference, wearable) => estimateBestFitShift(reference, wearable)
};
