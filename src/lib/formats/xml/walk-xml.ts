/**
 * Walks an XML file as a stream of elements with their local names, and survives what real exporters write.
 *
 * - elements go by local name, whatever their prefix and whether it was declared
 * - no document type is processed: one that declares entities is refused (they can be made to expand without bound or
 *   to fetch other files), a plain one is passed over (`doctype-ignored`)
 * - errors (a bare `&`, a control character, a wrong end tag) do not end the reading (`xml-errors`); a file that
 *   ends early gives what stands before (`missing-tail`)
 * - blanks or bytes before the XML declaration are passed over
 */
import { SaxesParser } from 'saxes';
import type { ReadingWarning } from '../recording';

export interface XmlHandler {
	/** `path` holds local names from the root to this element. */
	open(name: string, attributes: Record<string, string>, path: readonly string[]): void;
	/** `text` is the element's own text, trimmed; '' for elements with children only. */
	close(name: string, text: string, path: readonly string[]): void;
}

export interface XmlReport {
	warnings: ReadingWarning[];
	refusal: { code: string; message: string } | null;
}

const CHUNK = 65_536;
const DEEPEST = 64;
const LONGEST_TEXT = 4096;
const LONGEST_STRETCH = 1_000_000;
/** A file with more faults than this is no XML that an exporter wrote; reading stops there. */
const MOST_ERRORS = 10_000;
/** An ampersand that begins none of XML's own entities; the parser would swallow all up to the next semicolon. */
const BARE_AMPERSAND = /&(?!(?:#\d{1,7}|#x[\da-f]{1,6}|amp|lt|gt|quot|apos);)/gi;

function localName(name: string): string {
	const colon = name.indexOf(':');
	return colon < 0 ? name : name.slice(colon + 1);
}

/**
 * Walks the elements.
 *
 * @param text decoded text of the file
 * @param handler told of each element
 */
export function walkXml(text: string, handler: XmlHandler): XmlReport {
	const warnings: ReadingWarning[] = [];
	let refusal: XmlReport['refusal'] = null;
	let errors = 0;
	let firstError: { line: number; message: string } | null = null;
	let ended = false;
	let gaveUp = false;
	let lastClosing = 0;
	let elements = 0;
	let rootClosed = false;
	const path: string[] = [];
	const own: string[] = [];
	const parser = new SaxesParser({ xmlns: false, position: true });
	parser.on('error', (error) => {
		// What is still open at the end is told as a missing tail.
		if (ended) return;
		errors++;
		firstError ??= { line: parser.line, message: error.message.replace(/^\d+:\d+:\s*/, '').replace(/\.$/, '') };
	});
	parser.on('doctype', (doctype) => {
		if (/<!ENTITY|\[/i.test(doctype))
			refusal = {
				code: 'xml-entities',
				message: `The file declares XML entities (line ${parser.line}). They are not read, because they can be made to fill the memory or to fetch other files. Export the recording again without them.`
			};
		else
			warnings.push({
				code: 'doctype-ignored',
				message: 'The document type named in the file is not looked at.',
				at: { line: parser.line }
			});
	});
	parser.on('opentag', (tag) => {
		const name = localName(tag.name);
		if (path.length >= DEEPEST) {
			refusal = {
				code: 'xml-too-deep',
				message: `The elements of the file are nested more than ${DEEPEST} deep (line ${parser.line}). No recording is built like that.`
			};
			return;
		}
		elements++;
		path.push(name);
		own.push('');
		handler.open(name, tag.attributes, path);
	});
	const addText = (piece: string) => {
		const top = own.length - 1;
		if (top >= 0 && own[top].length < LONGEST_TEXT) own[top] += piece;
	};
	parser.on('text', addText);
	parser.on('cdata', addText);
	parser.on('closetag', (tag) => {
		const name = localName(tag.name);
		if (path[path.length - 1] !== name) return;
		// At the end of a cut file the parser closes what is open; half a value must not count.
		handler.close(name, ended ? '' : own[own.length - 1].trim(), path);
		path.pop();
		own.pop();
		if (path.length === 0 && !ended) rootClosed = true;
	});
	for (let at = Math.max(0, text.indexOf('<')); at < text.length && !refusal && !rootClosed;) {
		let end = Math.min(text.length, at + CHUNK);
		// An entity must not be parted between two pieces.
		const ampersand = text.lastIndexOf('&', end - 1);
		if (end < text.length && ampersand > end - 12 && ampersand > at) end = ampersand;
		const piece = text.slice(at, end);
		const bare = piece.search(BARE_AMPERSAND);
		if (bare < 0) parser.write(piece);
		else {
			firstError ??= { line: parser.line + piece.slice(0, bare).split('\n').length - 1, message: 'a bare ampersand' };
			parser.write(piece.replace(BARE_AMPERSAND, () => (errors++, '&amp;')));
		}
		const closing = text.lastIndexOf('>', end - 1);
		if (closing >= at) lastClosing = closing;
		else if (end - lastClosing > LONGEST_STRETCH)
			refusal = {
				code: 'xml-too-long',
				message: `From line ${parser.line} on ${LONGEST_STRETCH} characters follow without the end of an element. No recording is built like that.`
			};
		if (errors > MOST_ERRORS) {
			gaveUp = true;
			break;
		}
		at = end;
	}
	if (refusal) return { warnings, refusal };
	ended = true;
	if (!rootClosed) {
		warnings.push({
			code: 'missing-tail',
			message: `The file ends in line ${parser.line} before its last element is closed. The ${elements} elements before that are read.`,
			at: { line: parser.line }
		});
		while (path.length > 0) {
			handler.close(path[path.length - 1], '', path);
			path.pop();
		}
	}
	const first = firstError as { line: number; message: string } | null;
	if (errors > 0 && first)
		warnings.push({
			code: 'xml-errors',
			message: `${errors} ${errors === 1 ? 'fault' : 'faults'} in the XML, first in line ${first.line} (${first.message}). ${gaveUp ? `After line ${parser.line} reading stopped.` : 'What could be read is read.'}`,
			at: { line: first.line }
		});
	return { warnings, refusal };
}
