/**
 * Walks the messages of a FIT file, part after part, and goes on where strict readers stop.
 *
 * What is met in real files and what happens here:
 * - several files chained into one: each part is walked with definitions of its own (`chained-parts`)
 * - data size 0, left by a device that never closed the file: walked to the end (`unfinished`)
 * - fewer bytes than the header says: walked to the end (`missing-tail`)
 * - a stale data size with more messages behind it: walked on where they make sense (`stale-size`)
 * - a wrong check sum: said, the messages are read all the same (`wrong-crc`); a header check sum of 0 is legal
 * - bytes that are no message: passed over to the next place where messages make sense again (`damaged-bytes`)
 * - bytes after the last part that are no FIT: left out (`trailing-bytes`)
 */
import type { ReadingWarning } from '../recording';
import { crc16 } from './crc';
import { CUT, isSameDefinition, readDefinition, UNDEFINED_MESSAGE, type Definition } from './definition';

/**
 * Called for each data message.
 *
 * @param definition its layout; the same object for all messages that follow one definition
 * @param at byte position of the first field
 * @param timestamp raw FIT seconds of the message (its own, or from a compressed header), NaN where it has none
 */
export type MessageHandler = (definition: Definition, at: number, timestamp: number) => void;

export interface WalkReport {
	parts: number;
	warnings: ReadingWarning[];
}

const EMPTY_UINT32 = 0xffffffff;
const DAY_S = 86400;
const MOST_TOLD = 20;
/** Messages that may be walked on trial in one file, which bounds the time a damaged one can take. */
const TRIAL_BUDGET = 3_000_000;

interface TrialBudget {
	messages: number;
}

/** State within one part: its definitions and the clock that compressed headers count from. */
interface PartState {
	definitions: (Definition | undefined)[];
	lastTimestamp: number;
}

/** True where a FIT header stands at this byte. */
export function hasFitHeader(bytes: Uint8Array, at = 0): boolean {
	return (
		at + 12 <= bytes.length &&
		bytes[at] >= 12 &&
		bytes[at + 8] === 0x2e &&
		bytes[at + 9] === 0x46 &&
		bytes[at + 10] === 0x49 &&
		bytes[at + 11] === 0x54
	);
}

/**
 * Walks all messages of all parts.
 *
 * @param bytes the whole file
 * @param onMessage called in file order
 * @returns how many parts there were and what was wrong, with byte positions; never throws on bad content
 */
export function walkFit(bytes: Uint8Array, onMessage: MessageHandler): WalkReport {
	const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	const warnings: ReadingWarning[] = [];
	const budget = { messages: TRIAL_BUDGET };
	let parts = 0;
	let at = 0;
	while (hasFitHeader(bytes, at)) {
		parts++;
		at = walkPart(bytes, view, at, parts, onMessage, warnings, budget);
		if (at >= bytes.length || hasFitHeader(bytes, at)) continue;
		const next = nextHeader(bytes, at);
		if (bytes.length - at > 2)
			warnings.push({
				code: 'trailing-bytes',
				message: `${(next < 0 ? bytes.length : next) - at} bytes from byte ${at} on belong to no part of the file and are left out.`,
				at: { byte: at }
			});
		if (next < 0) break;
		at = next;
	}
	return { parts, warnings: firstOfEach(warnings) };
}

/** A file of a thousand damaged parts needs no thousand sentences. */
function firstOfEach(warnings: ReadingWarning[]): ReadingWarning[] {
	const counts = new Map<string, number>();
	for (const { code } of warnings) counts.set(code, (counts.get(code) ?? 0) + 1);
	const told = new Map<string, number>();
	return warnings.flatMap((warning) => {
		const nth = (told.get(warning.code) ?? 0) + 1;
		told.set(warning.code, nth);
		if (nth < MOST_TOLD) return [warning];
		const more = (counts.get(warning.code) ?? 0) - MOST_TOLD;
		return nth > MOST_TOLD
			? []
			: [more > 0 ? { ...warning, message: `${warning.message} ${more} more of this kind are not listed.` } : warning];
	});
}

function nextHeader(bytes: Uint8Array, from: number): number {
	for (let i = from; i + 12 <= bytes.length; i++)
		if (bytes[i + 8] === 0x2e && hasFitHeader(bytes, i) && bytes[i] <= 64) return i;
	return -1;
}

function walkPart(
	bytes: Uint8Array,
	view: DataView,
	start: number,
	part: number,
	onMessage: MessageHandler,
	warnings: ReadingWarning[],
	budget: TrialBudget
): number {
	const headerSize = bytes[start];
	const dataSize = view.getUint32(start + 4, true);
	const where = part === 1 ? '' : ` of part ${part}`;
	const state: PartState = { definitions: new Array(16).fill(undefined), lastTimestamp: NaN };
	if (headerSize >= 14 && start + 14 <= bytes.length) {
		const stated = view.getUint16(start + 12, true);
		if (stated !== 0 && stated !== crc16(bytes, start, start + 12))
			warnings.push({
				code: 'wrong-header-crc',
				message: `The check sum of the header${where} is wrong. The messages are read all the same.`,
				at: { byte: start + 12 }
			});
	}
	const dataStart = Math.min(start + headerSize, bytes.length);
	let end = dataStart + dataSize;
	if (dataSize === 0) {
		end = bytes.length;
		if (end - dataStart >= 2 && crc16(bytes, start, end) === 0) end -= 2;
		warnings.push({
			code: 'unfinished',
			message: `The header${where} says that it holds no data: the device never closed the file. All ${end - dataStart} bytes that follow are read.`,
			at: { byte: start + 4 }
		});
	} else if (end > bytes.length) {
		warnings.push({
			code: 'missing-tail',
			message: `The file ends ${end + 2 - bytes.length} bytes before the end that the header${where} names. What is there is read.`,
			at: { byte: bytes.length }
		});
		end = bytes.length;
	} else if (end + 2 > bytes.length) {
		warnings.push({
			code: 'missing-tail',
			message: `The check sum at the end${where} is missing.`,
			at: { byte: bytes.length }
		});
	} else if (view.getUint16(end, true) !== crc16(bytes, start, end)) {
		warnings.push({
			code: 'wrong-crc',
			message: `The check sum${where} is wrong: the file was changed or damaged after it was written. Everything readable is read.`,
			at: { byte: end }
		});
	}
	walkMessages(bytes, view, dataStart, end, state, onMessage, warnings, budget);
	let next = Math.min(end + 2, bytes.length);
	if (dataSize !== 0 && bytes.length - next >= 32 && !hasFitHeader(bytes, next)) {
		for (const from of [end, next]) {
			const trial = tryMessages(bytes, view, from, bytes.length, state, 1_000_000, budget);
			if (trial.timed < 3 || bytes.length - trial.at > 64) continue;
			warnings.push({
				code: 'stale-size',
				message: `The header${where} names ${dataSize} bytes, yet messages go on behind them. They are read too.`,
				at: { byte: from }
			});
			walkMessages(bytes, view, from, trial.at, state, onMessage, warnings, budget);
			next = bytes.length;
			break;
		}
	}
	return next;
}

function walkMessages(
	bytes: Uint8Array,
	view: DataView,
	from: number,
	end: number,
	state: PartState,
	onMessage: MessageHandler,
	warnings: ReadingWarning[],
	budget: TrialBudget
): void {
	let at = from;
	let resumed = 0;
	while (at < end) {
		const next = step(bytes, view, at, end, state, onMessage);
		if (next > 0) {
			at = next;
			continue;
		}
		if (next === CUT) {
			// A message that runs past the end is the ordinary mark of a cut file, which is told elsewhere.
			if (end - at > 2)
				warnings.push({
					code: 'message-cut',
					message: `The last message, at byte ${at}, is cut off and left out.`,
					at: { byte: at }
				});
			return;
		}
		const resume = resumed < 50 ? findMessages(bytes, view, at + 1, end, state, budget) : -1;
		resumed++;
		warnings.push({
			code: 'damaged-bytes',
			message:
				resume < 0
					? `From byte ${at} on nothing makes sense as a message. The ${end - at} bytes from there are left out.`
					: `Bytes ${at} to ${resume - 1} make no sense as messages and are left out. Reading goes on behind them.`,
			at: { byte: at }
		});
		if (resume < 0) return;
		at = resume;
	}
}

/** Reads one message at `at`; gives the position behind it, `CUT` where it runs past the end, or `UNDEFINED_MESSAGE`. */
function step(
	bytes: Uint8Array,
	view: DataView,
	at: number,
	end: number,
	state: PartState,
	onMessage: MessageHandler | null
): number {
	const header = bytes[at];
	if (header & 0x80) {
		const definition = state.definitions[(header >> 5) & 3];
		if (!definition) return UNDEFINED_MESSAGE;
		const next = at + 1 + definition.size;
		if (next > end) return CUT;
		let timestamp = state.lastTimestamp;
		const own =
			definition.timestampOffset < 0
				? EMPTY_UINT32
				: view.getUint32(at + 1 + definition.timestampOffset, definition.little);
		// A compressed header holds the low five bits of the time; a smaller value than before means that 32 s rolled over.
		if (own !== EMPTY_UINT32) timestamp = own;
		else if (timestamp === timestamp) timestamp += ((header & 0x1f) - (timestamp & 0x1f)) & 0x1f;
		state.lastTimestamp = timestamp;
		onMessage?.(definition, at + 1, timestamp);
		return next;
	}
	if (header & 0x40) {
		const present = state.definitions[header & 0x0f];
		if (present && isSameDefinition(bytes, at, present, end)) return at + present.definedIn.length;
		const definition = readDefinition(bytes, view, at, end);
		if (typeof definition === 'number') return definition;
		state.definitions[header & 0x0f] = definition.definition;
		return definition.next;
	}
	const definition = state.definitions[header & 0x0f];
	if (!definition) return UNDEFINED_MESSAGE;
	const next = at + 1 + definition.size;
	if (next > end) return CUT;
	let timestamp = NaN;
	if (definition.timestampOffset >= 0) {
		const raw = view.getUint32(at + 1 + definition.timestampOffset, definition.little);
		if (raw !== EMPTY_UINT32) state.lastTimestamp = timestamp = raw;
	}
	onMessage?.(definition, at + 1, timestamp);
	return next;
}

/** Walks without telling anyone, to learn whether the bytes make sense as messages from here on. */
function tryMessages(
	bytes: Uint8Array,
	view: DataView,
	from: number,
	end: number,
	state: PartState,
	limit: number,
	budget: TrialBudget
): { at: number; count: number; timed: number } {
	const trial: PartState = { definitions: state.definitions.slice(), lastTimestamp: state.lastTimestamp };
	let at = from;
	let count = 0;
	let timed = 0;
	let before = state.lastTimestamp;
	while (at < end && count < limit && budget.messages-- > 0) {
		let plausible = true;
		const next = step(bytes, view, at, end, trial, (_definition, _at, timestamp) => {
			if (timestamp !== timestamp) return;
			plausible = before !== before || Math.abs(timestamp - before) < DAY_S;
			if (plausible) timed++;
			before = timestamp;
		});
		if (next <= 0 || !plausible) break;
		count++;
		at = next;
	}
	return { at, count, timed };
}

/** The next byte from which ten messages, three of them with a fitting time, can be walked; −1 where there is none. */
function findMessages(
	bytes: Uint8Array,
	view: DataView,
	from: number,
	end: number,
	state: PartState,
	budget: TrialBudget
): number {
	const last = Math.min(end, from + 65536);
	for (let at = from; at < last && budget.messages > 0; at++) {
		const trial = tryMessages(bytes, view, at, end, state, 10, budget);
		if (trial.timed >= 3 && (trial.count === 10 || end - trial.at <= 2)) return at;
	}
	return -1;
}
