import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Trace } from '../formats/recording';
import { decodeTraceColumns, encodeTraceColumns } from './trace-columns';

describe('samples on their way to the page', () => {
	it('come out as they went in, to the last bit, for any number of recordings and samples', () => {
		const trace = fc.array(fc.double({ noNaN: true }), { maxLength: 40 }).map((values): Trace => ({ kind: 'heartRate', tS: Float64Array.from(values, (_, i) => i + 0.1), value: Float64Array.from(values) }));
		fc.assert(
			fc.property(fc.array(fc.record({ recordingId: fc.string(), traces: fc.array(trace, { maxLength: 3 }) }), { maxLength: 5 }), (recordings) => {
				const unique = recordings.map((r, i) => ({ ...r, recordingId: `${i} ${r.recordingId}` }));
				const decoded = decodeTraceColumns(encodeTraceColumns(unique).buffer);
				expect([...decoded]).toEqual(unique.map((r) => [r.recordingId, r.traces]));
			})
		);
	});

	it('an answer that was cut short is refused instead of showing half a session', () => {
		const bytes = encodeTraceColumns([{ recordingId: 'a', traces: [{ kind: 'heartRate', tS: new Float64Array(100), value: new Float64Array(100) }] }]);
		expect(() => decodeTraceColumns(bytes.buffer.slice(0, bytes.length - 8))).toThrow();
		expect(() => decodeTraceColumns(new ArrayBuffer(2))).toThrow();
	});
});
