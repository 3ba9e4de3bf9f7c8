/** Recordings as CSV with a header line; the device stands in comment lines above it, which the CSV reader knows. */
import { isOnFoot } from '../cadence';
import { CHANNEL_KINDS, type ChannelKind } from '../recording';
import { rowsToWrite, type RecordingToWrite } from './recording-to-write';

export interface WriteCsvOptions {
	delimiter?: ',' | ';' | '\t';
	decimalComma?: boolean;
	/** How times are written: `iso` (UTC), `iso-local` (no zone), `epoch-s`, `epoch-ms`, `elapsed` (seconds from the first row). */
	time?: 'iso' | 'iso-local' | 'epoch-s' | 'epoch-ms' | 'elapsed';
	/** Seconds that the written local time is ahead of UTC; only for `iso-local`. */
	utcOffsetS?: number;
	/** False leaves the comment lines out. */
	withDevice?: boolean;
}

const COLUMN: Record<ChannelKind, string> = {
	heartRate: 'heart_rate_bpm',
	rrInterval: 'rr_ms',
	cadence: 'cadence_rpm',
	speed: 'speed_m_s',
	power: 'power_w',
	altitude: 'altitude_m',
	distance: 'distance_m',
	temperature: 'temperature_c'
};

/**
 * Writes a CSV file, one row a moment. RR intervals get rows of their own time where no other value stands there.
 *
 * @param recording traces, device and activity
 * @param options separator, decimal mark, form of the times
 * @returns the text, lines ended by a line feed
 */
export function writeCsv(recording: RecordingToWrite, options: WriteCsvOptions = {}): string {
	const { delimiter = ',', decimalComma = false, time = 'iso', utcOffsetS = 0, withDevice = true } = options;
	const { rows, intervals } = rowsToWrite(recording);
	const byTime = new Map(rows.map((row) => [row.tS, row]));
	for (let i = 0; intervals && i < intervals.tS.length; i++) {
		const tS = intervals.tS[i];
		const row = byTime.get(tS) ?? { tS, values: {} };
		row.values.rrInterval = intervals.value[i];
		if (!byTime.has(tS)) {
			byTime.set(tS, row);
			rows.push(row);
		}
	}
	rows.sort((a, b) => a.tS - b.tS);
	const kinds = CHANNEL_KINDS.filter((kind) => recording.traces.some((trace) => trace.kind === kind));
	const lines: string[] = [];
	if (withDevice) {
		const { device } = recording;
		const facts: [string, string | null][] = [
			['maker', device.maker],
			['device', device.product],
			['serial', device.serial],
			['firmware', device.firmware],
			['activity', recording.activity]
		];
		for (const [name, value] of facts) if (value !== null) lines.push(`# ${name}: ${value}`);
	}
	const timeName = time === 'elapsed' ? 'elapsed_s' : 'time';
	const named = (kind: ChannelKind) =>
		kind === 'cadence' && isOnFoot(recording.activity) ? 'cadence_spm' : COLUMN[kind];
	lines.push([timeName, ...kinds.map(named)].join(delimiter));
	const figure = (value: number) => {
		const text = String(Number(value.toFixed(3)));
		if (!decimalComma) return text;
		const comma = text.replace('.', ',');
		return delimiter === ',' && comma !== text ? `"${comma}"` : comma;
	};
	const firstS = rows[0]?.tS ?? 0;
	const written = (tS: number) => {
		if (time === 'iso') return new Date(tS * 1000).toISOString();
		if (time === 'iso-local') return new Date((tS + utcOffsetS) * 1000).toISOString().slice(0, -1);
		if (time === 'epoch-s') return figure(tS);
		if (time === 'epoch-ms') return String(Math.round(tS * 1000));
		return figure(tS - firstS);
	};
	for (const row of rows) {
		const cells = kinds.map((kind) => {
			const value = row.values[kind];
			return value === undefined ? '' : figure(value);
		});
		lines.push([written(row.tS), ...cells].join(delimiter));
	}
	return lines.join('\n') + '\n';
}
