/**
 * Beats that a strap stored (under water, out of range) and handed over afterwards: `hr` messages.
 *
 * The first message of a series carries a time stamp and the strap's own counter (1/1024 s); the others only
 * counters, full or packed to 12 bits. Each beat comes with a filtered heart rate. A series may begin long before
 * the activity that it belongs to.
 *
 * @see FIT profile, message `hr` (132): fields 0 fractional_timestamp 1/32768 s, 1 time256 1/256 s, 6 filtered_bpm,
 *   9 event_timestamp 1/1024 s, 10 event_timestamp_12 (published by the format's owner; from memory, checked on real files)
 */
import { readNumber } from './base-types';
import type { Definition } from './definition';

export interface StoredBeats {
	/** Time of each beat, epoch seconds, in file order. */
	tS: number[];
	/** Filtered heart rate at the beat; NaN where the strap gave none. */
	bpm: number[];
	/** Interval from the beat before, ms; NaN at the start of a series. */
	rrMs: number[];
	/** Beats that could not be placed because no message before them carried a time stamp. */
	withoutClock: number;
}

export class StoredBeatReader {
	readonly beats: StoredBeats = { tS: [], bpm: [], rrMs: [], withoutClock: 0 };
	/** Epoch seconds at which the strap's counter stood at 0. */
	private anchorS = NaN;
	/** Counter of the last beat, 1/1024 s. */
	private counter = NaN;

	/** Takes one `hr` message. `timestampS` is its time in epoch seconds, NaN where it has none. */
	message(view: DataView, bytes: Uint8Array, definition: Definition, at: number, timestampS: number): void {
		let fraction = 0;
		const full: number[] = [];
		const packed: number[] = [];
		const bpm: number[] = [];
		for (const field of definition.fields) {
			const from = at + field.offset;
			if (field.number === 0) {
				const raw = field.size >= 2 ? readNumber(view, from, 4, definition.little) : NaN;
				if (raw === raw) fraction = raw / 32768;
			} else if (field.number === 1) {
				const raw = readNumber(view, from, 2, definition.little);
				if (raw === raw) fraction = raw / 256;
			} else if (field.number === 6) {
				for (let i = 0; i < field.size; i++) bpm.push(readNumber(view, from + i, 2, definition.little));
			} else if (field.number === 9) {
				for (let i = 0; i + 4 <= field.size; i += 4) full.push(readNumber(view, from + i, 6, definition.little));
			} else if (field.number === 10) {
				for (let i = 0; i + 3 <= field.size; i += 3) {
					const middle = bytes[from + i + 1];
					packed.push(bytes[from + i] | ((middle & 0x0f) << 8), (middle >> 4) | (bytes[from + i + 2] << 4));
				}
			}
		}
		if (timestampS === timestampS && full.length > 0 && full[0] === full[0]) {
			this.anchorS = timestampS + fraction - full[0] / 1024;
			this.counter = NaN;
		}
		let index = 0;
		for (const counter of full) {
			const rate = bpm[index++];
			if (counter !== counter) continue;
			this.beat(counter, rate, counter - this.counter);
		}
		for (const low of packed) {
			const rate = bpm[index++];
			// Where fewer rates than counters are given, the rest of the packed field is padding.
			if (rate === undefined || rate !== rate || this.counter !== this.counter) continue;
			const step = (low - (this.counter & 0xfff)) & 0xfff;
			if (step === 0) continue;
			this.beat(this.counter + step, rate, step);
		}
	}

	private beat(counter: number, rate: number | undefined, step: number): void {
		this.counter = counter;
		if (this.anchorS !== this.anchorS) {
			this.beats.withoutClock++;
			return;
		}
		this.beats.tS.push(this.anchorS + counter / 1024);
		this.beats.bpm.push(rate !== undefined && rate > 0 ? rate : NaN);
		this.beats.rrMs.push(step > 0 && step < 4096 ? (step * 1000) / 1024 : NaN);
	}
}
