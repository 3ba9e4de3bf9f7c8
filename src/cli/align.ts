/** `align REFERENCE WEARABLE [REFERENCE WEARABLE …]`: one JSON line a pair, every shift in seconds to add to the wearable's stamps. */
import { readFile as readBytes } from 'node:fs/promises';
import { basename } from 'node:path';
import { readFile } from '../lib/formats';
import { traceOf, type Trace } from '../lib/formats/recording';
import { estimateBestFitShift } from '../lib/signal';

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
	if (args.length === 0 || args.length % 2 !== 0) {
		console.error('align takes pairs of files: REFERENCE WEARABLE [REFERENCE WEARABLE …].');
		return 2;
	}
	let refused = false;
	for (let i = 0; i < args.length; i += 2) {
		const [reference, wearable] = [args[i], args[i + 1]];
		try {
			const estimate = estimateBestFitShift(await heartRateOf(reference), await heartRateOf(wearable));
			const { bestFitShiftS, ci95, reliable, reason, candidates, clockOffsetS, clockOffsetCi95, responseLagS } = estimate;
			console.log(JSON.stringify({ reference, wearable, bestFitShiftS, ci95, reliable, reason, reasonCode: estimate.reasonCode, candidates, clockOffsetS, clockOffsetCi95, responseLagS }));
		} catch (cause) {
			if (!(cause instanceof Refused)) throw cause;
			refused = true;
			console.log(JSON.stringify({ file: cause.file, reference, wearable, error: { code: cause.code, message: cause.message } }));
		}
	}
	return refused ? 1 : 0;
}

async function heartRateOf(file: string): Promise<Trace> {
	const bytes = await readBytes(file).catch((cause: NodeJS.ErrnoException) => {
		throw new Refused(file, cause.code === 'ENOENT' ? 'not-found' : 'unreadable-file', cause.code === 'ENOENT' ? `There is no file ${file}. Check the path.` : `${file} cannot be opened (${cause.code ?? cause.message}). Check its permissions.`);
	});
	const reading = readFile(new Uint8Array(bytes), basename(file));
	if (!reading.ok) throw new Refused(file, reading.refusal.code, reading.refusal.message);
	const trace = traceOf(reading.recording, 'heartRate');
	if (!trace) throw new Refused(file, 'no-heart-rate', `${file} holds no heart rate. Choose the file of a device that recorded it.`);
	return trace;
}
