/** Bytes of a text file to text, whatever wrote it. */
import type { ReadingWarning } from './recording';

export interface DecodedText {
	text: string;
	warnings: ReadingWarning[];
}

/**
 * Decodes text: a byte-order mark decides; without one UTF-16 is told by its zero bytes, UTF-8 by being valid, and
 * anything else is taken as Windows-1252 (which holds ISO-8859-1), with a warning where that matters.
 *
 * @param bytes content of the file
 * @returns the text without its byte-order mark; lines end with a line feed whatever the file used
 */
export function decodeText(bytes: Uint8Array): DecodedText {
	const utf16 = utf16Order(bytes);
	const plain = withLineFeeds(utf16 ? new TextEncoder().encode(new TextDecoder(utf16).decode(bytes)) : bytes);
	return decodeBytes(plain);
}

/** Every line end as one line feed. Done on bytes: a text of nothing but line ends would exhaust a regular expression. */
function withLineFeeds(bytes: Uint8Array): Uint8Array {
	let at = bytes.indexOf(0x0d);
	if (at < 0) return bytes;
	const out = new Uint8Array(bytes.length);
	out.set(bytes.subarray(0, at));
	let length = at;
	for (; at < bytes.length; at++) {
		if (bytes[at] !== 0x0d) out[length++] = bytes[at];
		else if (bytes[at + 1] !== 0x0a) out[length++] = 0x0a;
	}
	return out.subarray(0, length);
}

function decodeBytes(bytes: Uint8Array): DecodedText {
	const warnings: ReadingWarning[] = [];
	let text: string;
	try {
		text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
	} catch {
		// A multi-byte character cut at the very end is a cut file, no other encoding.
		const cut = withoutCutCharacter(bytes);
		try {
			text = new TextDecoder('utf-8', { fatal: true }).decode(cut);
		} catch {
			text = new TextDecoder('windows-1252').decode(bytes);
			warnings.push({
				code: 'not-utf-8',
				message:
					'The text is not UTF-8. It is read as Western European (Windows-1252); accented letters in names may be wrong, figures are not.'
			});
		}
	}
	return { text, warnings };
}

function utf16Order(bytes: Uint8Array): 'utf-16le' | 'utf-16be' | null {
	if (bytes[0] === 0xff && bytes[1] === 0xfe) return 'utf-16le';
	if (bytes[0] === 0xfe && bytes[1] === 0xff) return 'utf-16be';
	let even = 0;
	let odd = 0;
	const n = Math.min(bytes.length & ~1, 512);
	for (let i = 0; i < n; i += 2) {
		if (bytes[i] === 0) even++;
		if (bytes[i + 1] === 0) odd++;
	}
	if (n >= 8 && odd > 0.4 * n * 0.5 && even === 0) return 'utf-16le';
	if (n >= 8 && even > 0.4 * n * 0.5 && odd === 0) return 'utf-16be';
	return null;
}

function withoutCutCharacter(bytes: Uint8Array): Uint8Array {
	let end = bytes.length;
	for (let back = 0; back < 3 && end > 0 && (bytes[end - 1] & 0xc0) === 0x80; back++) end--;
	return end > 0 && bytes[end - 1] >= 0xc0 ? bytes.subarray(0, end - 1) : bytes;
}

/** True where the bytes look like text: few control characters among the first of them. */
export function looksLikeText(bytes: Uint8Array): boolean {
	if (utf16Order(bytes)) return true;
	const n = Math.min(bytes.length, 4096);
	let odd = 0;
	for (let i = 0; i < n; i++) if (bytes[i] < 9 || (bytes[i] > 13 && bytes[i] < 32)) odd++;
	return odd <= n / 100;
}
