/** Compressed files, unpacked within bounds: a small file that would grow without end is refused, not tried. */
import { Gunzip, unzipSync, type UnzipFileInfo } from 'fflate';

export const MOST_UNPACKED_BYTES = 200_000_000;
const MOST_ENTRIES = 2000;
const CHUNK = 16_384;

export type Unpacked = { ok: true; bytes: Uint8Array; cut: boolean } | { ok: false; code: string; message: string };

export function isGzip(bytes: Uint8Array): boolean {
	return bytes.length >= 3 && bytes[0] === 0x1f && bytes[1] === 0x8b && bytes[2] === 8;
}

export function isZip(bytes: Uint8Array): boolean {
	return (
		bytes.length >= 4 &&
		bytes[0] === 0x50 &&
		bytes[1] === 0x4b &&
		((bytes[2] === 3 && bytes[3] === 4) || (bytes[2] === 5 && bytes[3] === 6))
	);
}

function tooLarge(most: number): { ok: false; code: string; message: string } {
	return {
		ok: false,
		code: 'unpacks-too-large',
		message: `The compressed content is larger than ${Math.round(most / 1e6)} MB. No recording is that long; unpack the file and import the recordings in it.`
	};
}

/**
 * Unpacks gzip in small steps and stops at the bound.
 *
 * @param bytes a gzip file; one that ends early gives what can be unpacked (`cut`)
 * @param most upper bound of the result, bytes
 */
export function gunzipBounded(bytes: Uint8Array, most: number): Unpacked {
	const pieces: Uint8Array[] = [];
	let length = 0;
	let complete = false;
	const stream = new Gunzip((piece, final) => {
		length += piece.length;
		if (length <= most) pieces.push(piece);
		if (final) complete = true;
	});
	try {
		for (let at = 0; at < bytes.length && length <= most; at += CHUNK)
			stream.push(bytes.subarray(at, at + CHUNK), at + CHUNK >= bytes.length);
	} catch (error) {
		if (length === 0)
			return {
				ok: false,
				code: 'damaged-archive',
				message: `The compressed file is damaged and cannot be unpacked (${error instanceof Error ? error.message : 'unknown fault'}). Copy it again.`
			};
		complete = false;
	}
	if (length > most) return tooLarge(most);
	const whole = new Uint8Array(length);
	let at = 0;
	for (const piece of pieces) {
		whole.set(piece, at);
		at += piece.length;
	}
	return { ok: true, bytes: whole, cut: !complete };
}

/** Folders and files that programs add to archives and that hold no recording. */
export function isJunkEntry(name: string): boolean {
	const parts = name.split('/');
	const base = parts[parts.length - 1];
	return base === '' || parts.includes('__MACOSX') || base.startsWith('.') || /^(thumbs\.db|desktop\.ini)$/i.test(base);
}

/**
 * Entries of a zip that may hold recordings, listed without unpacking any.
 *
 * @returns names with their stated size; a refusal where the archive is damaged or too large altogether
 */
export function listZip(
	bytes: Uint8Array,
	most: number
): { ok: true; entries: UnzipFileInfo[] } | { ok: false; code: string; message: string } {
	const entries: UnzipFileInfo[] = [];
	let total = 0;
	let count = 0;
	try {
		unzipSync(bytes, {
			filter(entry) {
				count++;
				if (count > MOST_ENTRIES || isJunkEntry(entry.name)) return false;
				total += entry.originalSize;
				entries.push(entry);
				return false;
			}
		});
	} catch (error) {
		return {
			ok: false,
			code: 'damaged-archive',
			message: `The archive is damaged or cut (${error instanceof Error ? error.message : 'unknown fault'}). Copy it again, or unpack it with another program.`
		};
	}
	if (count > MOST_ENTRIES)
		return {
			ok: false,
			code: 'too-many-entries',
			message: `The archive holds ${count} files; at most ${MOST_ENTRIES} are read at once. Split it.`
		};
	if (total > most) return tooLarge(most);
	return { ok: true, entries };
}

/** Unpacks one entry of a zip; never more than its stated size, which `listZip` has bounded. */
export function unzipEntry(bytes: Uint8Array, name: string): Unpacked {
	try {
		let taken = false;
		const files = unzipSync(bytes, { filter: (entry) => !taken && entry.name === name && (taken = true) });
		const content = files[name];
		if (!content) return { ok: false, code: 'damaged-archive', message: `${name} could not be found in the archive.` };
		return { ok: true, bytes: content, cut: false };
	} catch (error) {
		return {
			ok: false,
			code: 'damaged-archive',
			message: `${name} could not be unpacked (${error instanceof Error ? error.message : 'unknown fault'}). Copy the archive again.`
		};
	}
}
