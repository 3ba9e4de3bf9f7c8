/**
 * CRC-16 of FIT files: the reflected polynomial 0xA001, started at 0.
 *
 * The format publishes it as a table for half bytes; a table for whole bytes is the same sum at twice the speed.
 */
const BYTE_TABLE = new Uint16Array(256);
for (let byte = 0; byte < 256; byte++) {
	let crc = byte;
	for (let bit = 0; bit < 8; bit++) crc = crc & 1 ? (crc >>> 1) ^ 0xa001 : crc >>> 1;
	BYTE_TABLE[byte] = crc;
}

/**
 * Check sum of the bytes from `from` up to, not including, `to`.
 *
 * @param bytes any bytes
 * @param from first byte, 0 or more
 * @param to one past the last byte, at most the length
 * @param start sum of what went before, 0 at the beginning
 * @returns 0 to 65535
 */
export function crc16(bytes: Uint8Array, from = 0, to = bytes.length, start = 0): number {
	let crc = start;
	for (let i = from; i < to; i++) crc = (crc >>> 8) ^ BYTE_TABLE[(crc ^ bytes[i]) & 0xff];
	return crc;
}
