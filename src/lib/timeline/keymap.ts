/**
 * Which key does what, as data: keys sheet, foot line, command list and the listener all read it.
 *
 * Letters go by their meaning (`event.key`), punctuation and digits by their place on the board (`event.code`), so
 * that a key stays under the same finger on every layout. Left alone: what browsers and screen readers use.
 */
import type { TagKind } from '../agreement/tag';
import type { CommandGroup, CommandName } from './commands';

/** Where a key acts: with the focus on the bench, on the offset rule's slider, or anywhere on the page but in a field. */
export type KeyPlace = 'bench' | 'rule' | 'anywhere';

export interface Stroke {
	/** By meaning: a lower-case letter, `?`, or a named key (`ArrowLeft`). Exactly one of `key` and `code`. */
	key?: string;
	/** By place: `Comma`, `Digit1`. */
	code?: string;
	shift?: boolean;
	alt?: boolean;
	/** Ctrl, or Cmd on a Mac. */
	mod?: boolean;
}

interface KeyBinding {
	stroke: Stroke;
	command: CommandName;
	places: readonly KeyPlace[];
}

export interface KeyRow {
	group: CommandGroup;
	/** As the key sheet says it. */
	words: string;
	bindings: readonly KeyBinding[];
}

const BENCH: readonly KeyPlace[] = ['bench'];
const RULE: readonly KeyPlace[] = ['rule'];
const BENCH_AND_RULE: readonly KeyPlace[] = ['bench', 'rule'];
const ANYWHERE: readonly KeyPlace[] = ['anywhere'];
const bind = (command: CommandName, stroke: Stroke, places: readonly KeyPlace[] = BENCH): KeyBinding => ({ command, stroke, places });
const row = (group: CommandGroup, words: string, ...bindings: KeyBinding[]): KeyRow => ({ group, words, bindings });

/** The keys that come with the program, without the kinds' letters, which are the team's. */
export const KEY_ROWS: readonly KeyRow[] = [
	row('Cursor and view', 'cursor 1 s', bind('cursorBack', { key: 'ArrowLeft' }), bind('cursorForward', { key: 'ArrowRight' })),
	row('Cursor and view', 'cursor 10 s', bind('cursorBackFar', { key: 'ArrowLeft', shift: true }), bind('cursorForwardFar', { key: 'ArrowRight', shift: true })),
	row('Cursor and view', 'one view back, on', bind('viewBack', { key: 'PageUp' }), bind('viewForward', { key: 'PageDown' })),
	row('Cursor and view', 'start, end of the session', bind('goToStart', { key: 'Home' }), bind('goToEnd', { key: 'End' })),
	row('Cursor and view', 'zoom in, out', bind('zoomIn', { key: 'z' }), bind('zoomOut', { key: 'z', shift: true })),
	row('Cursor and view', 'whole session', bind('showWhole', { code: 'Digit0' }), bind('showWhole', { code: 'Numpad0' })),
	row('Cursor and view', 'fit the held tag', bind('fitHeld', { key: 'f' })),
	row('Cursor and view', 'go to a time', bind('goToTime', { key: 'g' })),

	row('Trace', 'hold that wearable', ...([1, 2, 3, 4, 5, 6] as const).flatMap((n) => [bind(`hold${n}`, { code: `Digit${n}` }, BENCH_AND_RULE), bind(`hold${n}`, { code: `Numpad${n}` }, BENCH_AND_RULE)])),
	row('Trace', 'previous, next trace', bind('holdPrevious', { key: 'ArrowUp' }), bind('holdNext', { key: 'ArrowDown' })),
	row('Trace', 'next trace; with Shift the previous', bind('holdNext', { key: 't' }), bind('holdPrevious', { key: 't', shift: true })),

	row('Offset', 'offset 0.1 s', bind('nudgeBack', { code: 'Comma' }, BENCH_AND_RULE), bind('nudgeForward', { code: 'Period' }, BENCH_AND_RULE)),
	row('Offset', 'offset 1 s', bind('nudgeBackFar', { code: 'Comma', shift: true }, BENCH_AND_RULE), bind('nudgeForwardFar', { code: 'Period', shift: true }, BENCH_AND_RULE)),
	row('Offset', 'offset 10 s', bind('nudgeBackFarthest', { code: 'Comma', alt: true }, BENCH_AND_RULE), bind('nudgeForwardFarthest', { code: 'Period', alt: true }, BENCH_AND_RULE)),
	row('Offset', 'put at peak', bind('putAtPeak', { key: 'p' }, BENCH_AND_RULE)),
	row('Offset', 'lock, unlock', bind('toggleLock', { key: 'l' }, BENCH_AND_RULE)),
	row('Offset', 'open or fold the rule', bind('toggleRule', { key: 'o' }, BENCH_AND_RULE)),
	row(
		'Offset',
		'on the rule: 0.01 s',
		bind('nudgeBackFine', { key: 'ArrowLeft' }, RULE),
		bind('nudgeForwardFine', { key: 'ArrowRight' }, RULE),
		bind('nudgeBackFine', { key: 'ArrowDown' }, RULE),
		bind('nudgeForwardFine', { key: 'ArrowUp' }, RULE)
	),
	row('Offset', 'on the rule: 1 s', bind('nudgeForwardFar', { key: 'PageUp' }, RULE), bind('nudgeBackFar', { key: 'PageDown' }, RULE)),
	row('Offset', 'on the rule: to the peak', bind('putAtPeak', { key: 'Home' }, RULE)),

	row('Tag', 'start, then end at the cursor; on a held tag its nearer edge', bind('setEdge', { key: 'e' })),
	row('Tag', 'snap both edges', bind('snapEdges', { key: 'e', shift: true })),
	row('Tag', 'in or out of cleaned', bind('toggleCleaned', { key: 'i' })),
	row('Tag', 'jot a note', bind('note', { key: 'j' })),
	row('Tag', 'remove', bind('remove', { key: 'Delete' })),
	row('Tag', 'hold the tag at the cursor; open its detail', bind('openDetail', { key: 'Enter' })),
	row('Tag', 'let go', bind('letGo', { key: 'Escape' })),

	row('Proposals', 'next, back', bind('nextProposal', { key: 'n' }), bind('previousProposal', { key: 'b' })),
	row('Proposals', 'of the same kind', bind('nextProposalOfKind', { key: 'n', shift: true }), bind('previousProposalOfKind', { key: 'b', shift: true })),
	row('Proposals', 'accept', bind('accept', { key: 'a' })),
	row('Proposals', 'cross out', bind('crossOut', { key: 'x' })),

	row('Show', 'difference strip', bind('toggleDifference', { key: 'w' })),
	row('Show', 'cadence lane; with Shift over the plot', bind('toggleCadence', { key: 'k' }), bind('toggleCadenceOverPlot', { key: 'k', shift: true })),
	row('Show', 'command list', bind('commandList', { key: ' ' }), bind('commandList', { key: 'F2' }, ANYWHERE)),
	row('Show', 'all keys', bind('allKeys', { key: '?' }, BENCH_AND_RULE)),

	row('Session', 'hand to review', bind('handIn', { key: 'Enter', shift: true })),
	row('Session', 'vouch', bind('vouch', { key: 'v' })),
	row('Session', 'hand back with a note', bind('handBack', { key: 'v', shift: true })),
	row('Session', 'undo; with Shift redo', bind('undo', { key: 'z', mod: true }, ANYWHERE), bind('redo', { key: 'z', mod: true, shift: true }, ANYWHERE))
];

/** One spelling for one stroke, to find it and to find two commands on it. */
export function strokeId({ key, code, shift, alt, mod }: Stroke): string {
	const what = key === undefined ? `code:${code ?? ''}` : `key:${key}`;
	return `${mod ? 'mod+' : ''}${alt ? 'alt+' : ''}${shift ? 'shift+' : ''}${what}`;
}

export interface Keymap {
	rows: readonly KeyRow[];
	/** By place and stroke. */
	find(place: KeyPlace, stroke: Stroke): CommandName | null;
	/** Kinds whose letter belongs to another command already: they are reached by the command list. */
	clashes: readonly TagKind[];
}

/** The whole keymap of a team: the program's keys and the letters of its kinds. */
export function keymapFor(kinds: readonly TagKind[]): Keymap {
	const byStroke = new Map<string, CommandName>();
	const place = ({ stroke, command, places }: KeyBinding) => {
		for (const p of places) byStroke.set(`${p} ${strokeId(stroke)}`, command);
	};
	for (const { bindings } of KEY_ROWS) bindings.forEach(place);
	const clashes: TagKind[] = [];
	const kindBindings: { kind: TagKind; binding: KeyBinding }[] = [];
	for (const kind of kinds) {
		if (kind.hotkey === null) continue;
		const binding = bind(`kind:${kind.key}`, { key: kind.hotkey.toLowerCase() });
		if (byStroke.has(`bench ${strokeId(binding.stroke)}`)) clashes.push(kind);
		else {
			place(binding);
			kindBindings.push({ kind, binding });
		}
	}
	const firstAfterEdges = KEY_ROWS.findIndex((r) => r.bindings.some((b) => b.command === 'toggleCleaned'));
	return {
		rows: KEY_ROWS.toSpliced(firstAfterEdges, 0, ...kindBindings.map(({ kind, binding }) => row('Tag', kind.name.toLowerCase(), binding))),
		find: (where, stroke) => byStroke.get(`${where} ${strokeId(stroke)}`) ?? null,
		clashes
	};
}

/** What of a keyboard event decides. */
export type KeyPress = Pick<KeyboardEvent, 'key' | 'code' | 'shiftKey' | 'altKey' | 'ctrlKey' | 'metaKey'>;

/**
 * The command for a key pressed at a place, or null.
 *
 * @param singleKeys false switches off every key that types a character by itself (WCAG 2.1.4)
 */
export function commandFor(keymap: Keymap, where: KeyPlace, press: KeyPress, singleKeys = true): CommandName | null {
	const shift = press.shiftKey;
	const alt = press.altKey;
	const mod = press.ctrlKey || press.metaKey;
	const typed = Array.from(press.key).length === 1;
	if (typed && !singleKeys && !mod && !alt) return null;
	const atPlace = keymap.find(where, { code: press.code, shift, alt, mod });
	if (atPlace) return atPlace;
	if (!typed) return keymap.find(where, { key: press.key, shift, alt, mod });
	const key = press.key.toLowerCase();
	const letter = /^[a-z]$/.test(key) ? key : /^Key[A-Z]$/.test(press.code) && key > '\u007f' ? press.code.slice(3).toLowerCase() : null;
	if (letter) return keymap.find(where, { key: letter, shift, alt, mod });
	// A sign that needs Shift on one layout and not on another goes by what it is.
	return keymap.find(where, { key, alt, mod });
}

const CAPS: Record<string, string> = {
	ArrowLeft: '←',
	ArrowRight: '→',
	ArrowUp: '↑',
	ArrowDown: '↓',
	PageUp: 'Page Up',
	PageDown: 'Page Down',
	Escape: 'Esc',
	' ': 'Space',
	Comma: ',',
	Period: '.'
};

/** What stands on the keys of a stroke: `Shift`, `Z`. */
export function keyCaps({ key, code, shift, alt, mod }: Stroke): string[] {
	const id = key ?? code ?? '';
	const cap = Object.hasOwn(CAPS, id) ? CAPS[id] : id.replace(/^(Digit|Numpad)/, '');
	return [...(mod ? ['Ctrl'] : []), ...(alt ? ['Alt'] : []), ...(shift ? ['Shift'] : []), cap.length === 1 ? cap.toUpperCase() : cap];
}

/** The caps of the first key of a command, for buttons and lists; empty when it has none. */
export function keysOf(keymap: Keymap, command: CommandName): string[] {
	const binding = keymap.rows.flatMap((r) => r.bindings).find((b) => b.command === command);
	return binding ? keyCaps(binding.stroke) : [];
}

/** The key sheet: by group, one line a row; of the keys of one command the first. */
export function keySheet(keymap: Keymap): { name: CommandGroup; rows: { keys: string[]; words: string }[] }[] {
	const groups = new Map<CommandGroup, { keys: string[]; words: string }[]>();
	for (const { group, words, bindings } of keymap.rows) {
		const firsts = bindings.filter((b, i) => bindings.findIndex((other) => other.command === b.command) === i || (b.stroke.key !== undefined && b.places.includes('anywhere')));
		const rows = groups.get(group) ?? [];
		rows.push({ keys: firsts.flatMap((b) => keyCaps(b.stroke)), words });
		groups.set(group, rows);
	}
	return [...groups].map(([name, rows]) => ({ name, rows }));
}
