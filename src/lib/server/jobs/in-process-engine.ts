/** The engine in the caller's own thread: for the command line, demo content and tests, and inside the engine threads. */
import { readFile } from '../../formats';
import { isZip, listZip, MOST_UNPACKED_BYTES, unzipEntry } from '../../formats/archive/unpack';
import { estimateBestFitShift } from '../../signal';
import type { Engine, ReadEntry } from './engine';

export const engine: Engine = {
	read: async (bytes, fileName) => (isZip(bytes) ? readArchive(bytes, fileName) : [{ fileName, bytes: null, reading: readFile(bytes, fileName) }]),
	estimateShift: async (reference, wearable) => estimateBestFitShift(reference, wearable)
};

/** Every file of an archive with its own bytes, so that each is kept and recognised by itself. */
function readArchive(bytes: Uint8Array, fileName: string): ReadEntry[] {
	const listed = listZip(bytes, MOST_UNPACKED_BYTES);
	// The one door says in its own words what is wrong with the archive.
	if (!listed.ok || listed.entries.length === 0) return [{ fileName, bytes: null, reading: readFile(bytes, fileName) }];
	const names = [...new Set(listed.entries.map((entry) => entry.name))];
	return names.map((name): ReadEntry => {
		const unpacked = unzipEntry(bytes, name);
		if (!unpacked.ok) return { fileName: name, bytes: null, reading: { ok: false, refusal: { code: unpacked.code, message: unpacked.message }, warnings: [] } };
		return { fileName: name, bytes: unpacked.bytes, reading: readFile(unpacked.bytes, name) };
	});
}
