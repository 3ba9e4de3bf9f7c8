/**
 * The base types of FIT fields and how one value of each is read.
 *
 * The low five bits of the type byte number the type; bit 7 only says that byte order matters. Each type has one
 * value that means 'empty'.
 *
 * @see FIT protocol, section on base types (published by the format's owner; numbers from memory, checked on real files)
 */
export interface BaseType {
	name: string;
	/** Bytes of one element. */
	size: number;
}

const BASE_TYPES: readonly BaseType[] = [
	{ name: 'enum', size: 1 },
	{ name: 'sint8', size: 1 },
	{ name: 'uint8', size: 1 },
	{ name: 'sint16', size: 2 },
	{ name: 'uint16', size: 2 },
	{ name: 'sint32', size: 4 },
	{ name: 'uint32', size: 4 },
	{ name: 'string', size: 1 },
	{ name: 'float32', size: 4 },
	{ name: 'float64', size: 8 },
	{ name: 'uint8z', size: 1 },
	{ name: 'uint16z', size: 2 },
	{ name: 'uint32z', size: 4 },
	{ name: 'byte', size: 1 },
	{ name: 'sint64', size: 8 },
	{ name: 'uint64', size: 8 },
	{ name: 'uint64z', size: 8 }
];

/** The type behind a type byte; one that is not known is taken as plain bytes, so that the rest of the message is read. */
export function baseTypeOf(code: number): number {
	const index = code & 0x1f;
	return index < BASE_TYPES.length ? index : 13;
}

/** Bytes of one element of the base type with this index. */
export function elementSize(type: number): number {
	return BASE_TYPES[type].size;
}

/**
 * One numeric value at a byte position.
 *
 * @param view the whole file
 * @param at byte position of the element; the caller has checked that it lies inside the file
 * @param type index of the base type, from `baseTypeOf`
 * @param little true for little-endian messages
 * @returns the raw value without scale, or NaN where the file says 'empty' or the type is text
 */
export function readNumber(view: DataView, at: number, type: number, little: boolean): number {
	let value: number;
	switch (type) {
		case 0:
		case 2:
		case 13:
			value = view.getUint8(at);
			return value === 0xff ? NaN : value;
		case 1:
			value = view.getInt8(at);
			return value === 0x7f ? NaN : value;
		case 3:
			value = view.getInt16(at, little);
			return value === 0x7fff ? NaN : value;
		case 4:
			value = view.getUint16(at, little);
			return value === 0xffff ? NaN : value;
		case 5:
			value = view.getInt32(at, little);
			return value === 0x7fffffff ? NaN : value;
		case 6:
			value = view.getUint32(at, little);
			return value === 0xffffffff ? NaN : value;
		case 8:
			return view.getFloat32(at, little);
		case 9:
			return view.getFloat64(at, little);
		case 10:
			value = view.getUint8(at);
			return value === 0 ? NaN : value;
		case 11:
			value = view.getUint16(at, little);
			return value === 0 ? NaN : value;
		case 12:
			value = view.getUint32(at, little);
			return value === 0 ? NaN : value;
		case 14: {
			const wide = view.getBigInt64(at, little);
			return wide === 0x7fffffffffffffffn ? NaN : Number(wide);
		}
		case 15: {
			const wide = view.getBigUint64(at, little);
			return wide === 0xffffffffffffffffn ? NaN : Number(wide);
		}
		case 16: {
			const wide = view.getBigUint64(at, little);
			return wide === 0n ? NaN : Number(wide);
		}
		default:
			return NaN;
	}
}

/** Text of a string field: up to the first NUL, or the whole field where the end mark is missing. */
export function readText(bytes: Uint8Array, at: number, size: number): string {
	let end = at;
	while (end < at + size && bytes[end] !== 0) end++;
	return new TextDecoder('utf-8').decode(bytes.subarray(at, end)).trim();
}
