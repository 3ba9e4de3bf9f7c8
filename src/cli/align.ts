/**
 * `align REFERENCE WEARABLE [REFERENCE WEARABLE …]`: one JSON line a pair, every shift in seconds to add to the wearable's
 * stamps. What cannot be read is a line with an error and makes the exit status 1; the other pairs are still done.
 */
import { readFile as readBytes } from 'node:fs/promises';
import { basename } from 'node:path';
import { readFile } from '../lib/formats';
import { traceOf, type Recording } from '../lib/formats/recording';
import { alignRecordings } from '../lib/signal';

class Refused extends Error {
	constructor(
		readonly file: string,
		readonly code: string,
		message: string
	) {
		super(message);
	}
}

export async function align(args: string[]): Promise<number> {
	if (args.length === 0) {
		console.error('align takes pairs of files: REFERENCE WEARABLE [REFERENCE WEARABLE …].');
		return 2;
	}
	let refused = false;
	for (let i = 0; i < args.length; i += 2) {
		const [reference, wearable] = [args[i], args[i + 1]];
		try {
			if (wearable === undefined) throw new Refused(reference, 'no-partner', `${reference} stands alone: align takes pairs of files. Name the wearable's file after the reference's.`);
			// The answer's promised fields, then what else is known.
			const { bestFitShiftS, ci95, reliable, reason, candidates, clockOffsetS, clockOffsetCi95, responseLagS, ...more } = alignRecordings(await withHeartRate(reference), await withHeartRate(wearable));
			console.log(JSON.stringify({ reference, wearable, bestFitShiftS, ci95, reliable, reason, candidates, clockOffsetS, clockOffsetCi95, responseLagS, ...more }, toMilliseconds));
		} catch (cause) {
			if (!(cause instanceof Refused)) throw cause;
			refused = true;
			console.log(JSON.stringify({ file: cause.file, reference, wearable, error: { code: cause.code, message: cause.message } }));
		}
	}
	return refused ? 1 : 0;
}

/** Figures to a thousandth: more digits would only look exact. */
const toMilliseconds = (_: string, value: unknown) => (typeof value === 'number' ? Math.round(value * 1000) / 1000 + 0 : value);

async function withHeartRate(file: string): Promise<Recording> {
	const bytes = await readBytes(file).catch((cause: NodeJS.ErrnoException) => {
		throw new Refused(file, cause.code === 'ENOENT' ? 'not-found' : 'unreadable-file', cause.code === 'ENOENT' ? `There is no file ${file}. Check the path.` : `${file} cannot be opened (${cause.code ?? cause.message}). Check its permissions.`);
	});
	const reading = readFile(new Uint8Array(bytes), basename(file));
	if (!reading.ok) throw new Refused(file, reading.refusal.code, reading.refusal.message);
	if (!traceOf(reading.recording, 'heartRate')) throw new Refused(file, 'no-heart-rate', `${file} holds no heart rate. Choose the file of a device that recorded it.`);
	return reading.recording;
}
