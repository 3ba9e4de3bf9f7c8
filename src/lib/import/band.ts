/** Where the files of one found session stand on its clock rule, and their lines. */
import { signed } from '../text/figures';
import type { BoardFile, BoardSession } from './board';
import type { Outline } from './outline';
import { zoneShiftOf } from './zone';

/** A file's span as it is drawn: a clock in another zone is put right by whole hours, everything else stays visible. */
export function drawnSpan(file: BoardFile): { startS: number; endS: number; shiftS: number } | null {
	const { recording, question } = file;
	if (recording === null) return null;
	const asked = question?.code === 'clock' ? 0 : null;
	const shiftS = asked ?? (recording.offset?.stands ? (zoneShiftOf(recording.offset.offsetS) ?? 0) : 0);
	return { startS: recording.startS + shiftS, endS: recording.endS + shiftS, shiftS };
}

/** First and last moment of a band: everything that is drawn in it. */
export function bandSpan(session: Pick<BoardSession, 'startS' | 'endS'>, files: readonly BoardFile[]): { startS: number; endS: number } {
	let { startS, endS } = session;
	for (const file of files) {
		const span = drawnSpan(file);
		if (span === null) continue;
		startS = Math.min(startS, span.startS);
		endS = Math.max(endS, span.endS);
	}
	return { startS, endS };
}

/** One length for all bands, so that they compare; a session more than twice the usual one gets its own. */
export function usualLengthS(lengths: readonly number[]): number {
	if (lengths.length === 0) return 3600;
	const sorted = [...lengths].sort((a, b) => a - b);
	const median = sorted[Math.floor(sorted.length / 2)];
	return Math.max(...sorted.filter((l) => l <= 2 * median));
}

/** Lowest and highest value of several lines, bpm. */
export function valueRange(outlines: readonly Outline[]): { low: number; high: number } {
	let low = Infinity;
	let high = -Infinity;
	for (const { min, max } of outlines) {
		for (const v of min) if (v !== null && v < low) low = v;
		for (const v of max) if (v !== null && v > high) high = v;
	}
	return low < high ? { low, high } : { low: 60, high: 180 };
}

/** An SVG path: lowest and highest value per column, open where nothing was recorded. */
export function linePath(outline: Outline, x: (share: number) => number, y: (bpm: number) => number): string {
	const parts: string[] = [];
	const columns = outline.min.length;
	let isOpen = false;
	let last = 0;
	for (let i = 0; i < columns; i++) {
		const low = outline.min[i];
		const high = outline.max[i];
		if (low === null || high === null) {
			isOpen = false;
			continue;
		}
		const px = x((i + 0.5) / columns).toFixed(1);
		// The nearer end first: no combs on a line that rises.
		const [first, second] = Math.abs(low - last) <= Math.abs(high - last) ? [low, high] : [high, low];
		parts.push(`${isOpen ? 'L' : 'M'}${px} ${y(first).toFixed(1)}`);
		if (first !== second) parts.push(`L${px} ${y(second).toFixed(1)}`);
		last = second;
		isOpen = true;
	}
	return parts.join('');
}

/** `14 Oct`. */
export function dayOf(epochS: number): string {
	return new Date(epochS * 1000).toLocaleDateString('en-GB', { day: 'numeric', month: 'short', timeZone: 'UTC' });
}

/** The offset in a row: the figure where it stands, `unclear` where it does not, `…` while it is searched. */
export function offsetOf(file: BoardFile, hasReference: boolean): string | null {
	const offset = file.recording?.offset;
	if (!offset) return hasReference ? '…' : null;
	return offset.stands ? `${signed(offset.offsetS, 2)} s` : 'unclear';
}

/** Warnings that the row itself says; all of them stand in the file's panel. */
const REMARK: Record<string, string> = {
	'missing-tail': 'stops early',
	unfinished: 'stops early',
	'message-cut': 'stops early',
	'no-time-zone': 'no zone',
	'clock-jump': 'clock jumps',
	'backward-step': 'clock steps back',
	'second-heart-rate-source': 'two heart rates',
	'heart-rate-twice': 'two heart rates',
	renamed: 'renamed'
};

export function remarkOf(file: BoardFile): string | null {
	const codes = file.recording?.warnings.map((w) => w.code) ?? [];
	return codes.map((code) => REMARK[code]).find((word) => word !== undefined) ?? null;
}
