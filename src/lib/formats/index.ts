/**
 * Bytes of a file to a recording: the one door to all readers.
 *
 * What a file is, its content decides; its name is only used to tell the user where the two disagree.
 */
import { readFit } from './fit/read-fit';
import { hasFitHeader } from './fit/walk';
import type { Reading, ReadOptions } from './recording';

/**
 * Reads one file.
 *
 * @param bytes content of the file
 * @param fileName its name, for messages
 * @param options what the one who imports knows and the file does not say
 * @returns a recording with every oddity told, or a refusal with its remedy; never throws on bad content
 */
export function readFile(bytes: Uint8Array, fileName: string, options: ReadOptions = {}): Reading {
	if (bytes.length === 0)
		return refuse('empty-file', `${fileName} is empty (0 bytes). Copy it from the device again.`);
	if (hasFitHeader(bytes)) return readFit(bytes, options);
	return refuse('unknown-format', `${fileName} is none of FIT, TCX, GPX, CSV or interval text. Export it in one of these.`);
}

function refuse(code: string, message: string): Reading {
	return { ok: false, refusal: { code, message }, warnings: [] };
}
