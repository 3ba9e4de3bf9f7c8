/** FIT messages to bytes: definitions, values, header and check sums. */
import { crc16 } from '../fit/crc';

export const ENUM = 0x00;
export const UINT8 = 0x02;
export const SINT8 = 0x01;
export const STRING = 0x07;
export const UINT16 = 0x84;
export const UINT32 = 0x86;
export const UINT32Z = 0x8c;
export const BYTE = 0x0d;
const SIZE: Record<number, number> = {
	[ENUM]: 1,
	[UINT8]: 1,
	[SINT8]: 1,
	[UINT16]: 2,
	[UINT32]: 4,
	[UINT32Z]: 4,
	[BYTE]: 1,
	[STRING]: 1
};

/** One field of a message to define: number, base type, and for text or arrays the size in bytes. */
export type FieldToWrite = [number: number, type: number, size?: number];

export class FitBytes {
	private bytes = new Uint8Array(65536);
	private view = new DataView(this.bytes.buffer);
	length = 0;

	constructor(private readonly little: boolean) {}

	/** A definition message; `developer` fields are number, size and developer index. */
	define(local: number, global: number, fields: FieldToWrite[], developer: [number, number, number][] = []): void {
		this.put(0x40 | (developer.length ? 0x20 : 0) | local, UINT8);
		this.put(0, UINT8);
		this.put(this.little ? 0 : 1, UINT8);
		this.put(global, UINT16);
		this.put(fields.length, UINT8);
		for (const [number, type, size] of fields) {
			this.put(number, UINT8);
			this.put(size ?? SIZE[type], UINT8);
			this.put(type, UINT8);
		}
		if (developer.length === 0) return;
		this.put(developer.length, UINT8);
		for (const part of developer.flat()) this.put(part, UINT8);
	}

	/** One value in the byte order of the file. */
	put(value: number, type: number): void {
		this.room(8);
		switch (SIZE[type]) {
			case 1:
				this.view.setUint8(this.length, value & 0xff);
				break;
			case 2:
				this.view.setUint16(this.length, value, this.little);
				break;
			default:
				this.view.setUint32(this.length, value >>> 0, this.little);
		}
		this.length += SIZE[type];
	}

	/** Text padded with zeros to its size. */
	text(value: string, size: number): void {
		this.room(size);
		// The last byte stays 0: readers look for it.
		const encoded = new TextEncoder().encode(value).subarray(0, size - 1);
		this.bytes.fill(0, this.length, this.length + size);
		this.bytes.set(encoded, this.length);
		this.length += size;
	}

	/** The file with header and check sums; unfinished ones have data size 0 and no check sum at the end. */
	finish(finished = true): Uint8Array {
		const out = new Uint8Array(14 + this.length + 2);
		const view = new DataView(out.buffer);
		out[0] = 14;
		out[1] = 0x20;
		view.setUint16(2, 2160, true);
		view.setUint32(4, finished ? this.length : 0, true);
		out.set([0x2e, 0x46, 0x49, 0x54], 8);
		view.setUint16(12, crc16(out, 0, 12), true);
		out.set(this.bytes.subarray(0, this.length), 14);
		if (!finished) return out.subarray(0, 14 + this.length);
		view.setUint16(14 + this.length, crc16(out, 0, 14 + this.length), true);
		return out;
	}

	private room(size: number): void {
		if (this.length + size <= this.bytes.length) return;
		const larger = new Uint8Array(this.bytes.length * 2);
		larger.set(this.bytes);
		this.bytes = larger;
		this.view = new DataView(larger.buffer);
	}
}
