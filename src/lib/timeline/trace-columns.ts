/**
 * Samples of a session in one answer: 4 bytes with the length of a JSON header, the header, then the columns as
 * little-endian float64, each on a multiple of 8 bytes, so that the page uses them as they are.
 */
import type { ChannelKind, Trace } from '../formats/recording';

interface ColumnsHeader {
	version: 1;
	recordings: { recordingId: string; traces: { kind: ChannelKind; n: number }[] }[];
}

export const TRACE_COLUMNS_TYPE = 'application/vnd.nonius.traces';

/** Length of the JSON header with its padding, so that the first column begins on a multiple of 8. */
const paddedLength = (bytes: number): number => Math.ceil((4 + bytes) / 8) * 8 - 4;

/** @param recordings traces by recording, in the order in which they are wanted back */
export function encodeTraceColumns(recordings: readonly { recordingId: string; traces: readonly Trace[] }[]): Uint8Array<ArrayBuffer> {
	const header: ColumnsHeader = {
		version: 1,
		recordings: recordings.map(({ recordingId, traces }) => ({ recordingId, traces: traces.map(({ kind, tS }) => ({ kind, n: tS.length })) }))
	};
	const text = new TextEncoder().encode(JSON.stringify(header));
	const headerLength = paddedLength(text.length);
	const samples = recordings.reduce((sum, r) => sum + r.traces.reduce((n, t) => n + t.tS.length, 0), 0);
	const buffer = new ArrayBuffer(4 + headerLength + samples * 16);
	new DataView(buffer).setUint32(0, headerLength, true);
	new Uint8Array(buffer, 4, headerLength).fill(0x20);
	new Uint8Array(buffer, 4).set(text);
	let at = 4 + headerLength;
	for (const { traces } of recordings)
		for (const { tS, value } of traces)
			for (const column of [tS, value]) {
				new Float64Array(buffer, at, column.length).set(column);
				at += column.length * 8;
			}
	return new Uint8Array(buffer);
}

/**
 * @returns traces by recording; the columns are views of `buffer`
 * @throws RangeError or SyntaxError when the bytes are no such answer or were cut short
 */
export function decodeTraceColumns(buffer: ArrayBuffer): Map<string, Trace[]> {
	const headerLength = new DataView(buffer).getUint32(0, true);
	const header = JSON.parse(new TextDecoder().decode(new Uint8Array(buffer, 4, headerLength))) as ColumnsHeader;
	if (header.version !== 1) throw new SyntaxError('The samples came in a form that this page does not know. Load the page again.');
	const traces = new Map<string, Trace[]>();
	let at = 4 + headerLength;
	const column = (n: number): Float64Array => {
		const values = new Float64Array(buffer, at, n);
		at += n * 8;
		return values;
	};
	for (const recording of header.recordings) traces.set(recording.recordingId, recording.traces.map(({ kind, n }) => ({ kind, tS: column(n), value: column(n) })));
	return traces;
}
