/** Definition messages: which fields the data messages that follow them hold, and where. */
import { baseTypeOf, elementSize } from './base-types';

export interface FieldLayout {
	number: number;
	size: number;
	/** Index of the base type. */
	type: number;
	/** Byte position within the message, after its header byte. */
	offset: number;
}

export interface DeveloperFieldLayout {
	number: number;
	size: number;
	developerIndex: number;
	offset: number;
}

export interface Definition {
	globalNumber: number;
	little: boolean;
	fields: FieldLayout[];
	developerFields: DeveloperFieldLayout[];
	/** Bytes of one message after its header byte. */
	size: number;
	/** Position of the time stamp within the message, or −1. */
	timestampOffset: number;
	/** Bytes of the file that hold the definition. */
	definedIn: { from: number; length: number };
}

const TIMESTAMP_FIELD = 253;

/** The message runs past the end of the data. */
export const CUT = 0;
/** The bytes are no message. */
export const UNDEFINED_MESSAGE = -1;

/** Some devices define their records anew before each one; the definition is then kept as it is. */
export function isSameDefinition(bytes: Uint8Array, at: number, present: Definition, end: number): boolean {
	const { from, length } = present.definedIn;
	if (at + length > end) return false;
	for (let i = 0; i < length; i++) if (bytes[at + i] !== bytes[from + i]) return false;
	return true;
}

/** Reads the definition message at `at`; `CUT` where it runs past the end, `UNDEFINED_MESSAGE` where it is none. */
export function readDefinition(
	bytes: Uint8Array,
	view: DataView,
	at: number,
	end: number
): { definition: Definition; next: number } | number {
	if (at + 6 > end) return CUT;
	if (bytes[at + 2] > 1) return UNDEFINED_MESSAGE;
	const little = bytes[at + 2] === 0;
	const count = bytes[at + 5];
	let next = at + 6 + 3 * count;
	if (next > end) return CUT;
	const fields: FieldLayout[] = [];
	let offset = 0;
	let timestampOffset = -1;
	for (let i = 0; i < count; i++) {
		const f = at + 6 + 3 * i;
		const size = bytes[f + 1];
		const number = bytes[f];
		const type = baseTypeOf(bytes[f + 2]);
		if (number === TIMESTAMP_FIELD && size === 4) timestampOffset = offset;
		fields.push({ number, size, type, offset });
		offset += size;
	}
	const developerFields: DeveloperFieldLayout[] = [];
	if (bytes[at] & 0x20) {
		if (next + 1 > end) return CUT;
		const developerCount = bytes[next];
		const first = next + 1;
		next = first + 3 * developerCount;
		if (next > end) return CUT;
		for (let i = 0; i < developerCount; i++) {
			const f = first + 3 * i;
			developerFields.push({ number: bytes[f], size: bytes[f + 1], developerIndex: bytes[f + 2], offset });
			offset += bytes[f + 1];
		}
	}
	return {
		definition: {
			globalNumber: view.getUint16(at + 3, little),
			little,
			fields,
			developerFields,
			size: offset,
			timestampOffset,
			definedIn: { from: at, length: next - at }
		},
		next
	};
}

/** True where the size of a field fits its type: one or more whole elements. */
export function isWholeElements(field: FieldLayout): boolean {
	return field.size >= elementSize(field.type) && field.size % elementSize(field.type) === 0;
}
