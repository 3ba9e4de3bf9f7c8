/**
 * `nonius inspect FILE…`: what each file holds, one JSON line a file.
 *
 * `n` counts the values of a channel that are neither empty nor 0, as they stand in the file (0 counts for altitude
 * and temperature); values that share a time stamp are counted each, although the recording keeps one of them.
 * `medianIntervalS` and `maxGapS` are between the distinct time stamps of the channel's values.
 * `startedAt` and `durationS` span all records, also those without a heart rate.
 */
import { readFile as readBytes } from 'node:fs/promises';
import { basename } from 'node:path';
import { describeTrace } from '../lib/formats/describe';
import { readFiles, type NamedReading } from '../lib/formats';

/** JSON line of one reading. */
export function inspectionLine(file: string, { reading }: NamedReading): Record<string, unknown> {
	if (!reading.ok) return { file, error: reading.refusal };
	const { recording } = reading;
	return {
		file,
		format: recording.format,
		device: recording.device,
		startedAt: new Date(recording.startS * 1000).toISOString(),
		durationS: rounded(recording.endS - recording.startS),
		channels: recording.traces.filter((trace) => trace.inFile?.n !== 0).map((trace) => describeTrace(trace)),
		warnings: recording.warnings.map(({ code, message }) => ({ code, message }))
	};
}

function rounded(value: number): number {
	return Number(value.toFixed(3));
}

/**
 * Runs the command.
 *
 * @param args paths of files
 * @returns exit status: 0, or 1 where a file was refused or could not be opened
 */
export async function inspect(args: string[]): Promise<number> {
	const files = args.filter((argument) => argument !== '--');
	if (files.length === 0) {
		process.stderr.write('Name at least one file: nonius inspect FILE…\n');
		return 2;
	}
	let status = 0;
	for (const file of files) {
		for (const line of await inspectFile(file)) {
			if ('error' in line) status = 1;
			process.stdout.write(JSON.stringify(line) + '\n');
		}
	}
	return status;
}

async function inspectFile(file: string): Promise<Record<string, unknown>[]> {
	let bytes: Uint8Array;
	try {
		bytes = await readBytes(file);
	} catch (error) {
		const code = error instanceof Error && 'code' in error ? String(error.code) : '';
		const message =
			code === 'ENOENT'
				? `There is no file ${file}. Check the path.`
				: code === 'EISDIR'
					? `${file} is a folder. Name the files in it.`
					: `${file} cannot be opened (${code}).`;
		return [{ file, error: { code: 'cannot-open', message } }];
	}
	const readings = readFiles(bytes, basename(file), { nowS: Date.now() / 1000 });
	// A recording out of an archive is named by both, so that every line can be told apart.
	return readings.map((entry) => inspectionLine(readings.length === 1 ? file : `${file}/${entry.name}`, entry));
}
