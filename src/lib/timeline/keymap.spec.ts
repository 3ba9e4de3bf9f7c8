import { describe, expect, it } from 'vitest';
import { DEFAULT_TAG_KINDS } from '../agreement/tag-kinds';
import { commandNamed } from './commands';
import { keyHints } from './hints';
import { commandFor, KEY_ROWS, keyCaps, keymapFor, keySheet, keysOf, strokeId, type KeyPress } from './keymap';
import { after, session, tag } from './testing/session-in-hand';

const press = (key: string, more: Partial<KeyPress> = {}): KeyPress => ({ key, code: '', shiftKey: false, altKey: false, ctrlKey: false, metaKey: false, ...more });
const keymap = keymapFor(DEFAULT_TAG_KINDS);
const bindings = keymap.rows.flatMap((r) => r.bindings);

describe('the keymap', () => {
	it('has no two commands on one key in one place', () => {
		const seen = new Map<string, string>();
		for (const { stroke, places, command } of bindings)
			for (const place of places) {
				const id = `${place} ${strokeId(stroke)}`;
				expect(seen.get(id) ?? command, id).toBe(command);
				expect(seen.has(id), `${id} stands twice`).toBe(false);
				seen.set(id, command);
			}
	});

	it('has a free letter for every kind that comes with the program, and every key names a command that exists', () => {
		expect(keymap.clashes).toEqual([]);
		for (const kind of DEFAULT_TAG_KINDS) if (kind.hotkey) expect(commandFor(keymap, 'bench', press(kind.hotkey.toLowerCase()))).toBe(`kind:${kind.key}`);
		for (const { command } of bindings) expect(commandNamed(command), command).not.toBeNull();
	});

	it('keeps the program’s keys when a team gives a kind one of them, and says which', () => {
		const clashing = { ...DEFAULT_TAG_KINDS[0], key: 'own', name: 'Own', hotkey: 'E' };
		const team = keymapFor([clashing]);
		expect(team.clashes).toEqual([clashing]);
		expect(commandFor(team, 'bench', press('e'))).toBe('setEdge');
	});

	it('leaves alone what browsers and screen readers use', () => {
		const taken = ['mod+key:k', 'mod+key:l', 'mod+key:t', 'mod+key:w', 'mod+key:n', 'mod+key:f', 'mod+key:p', 'mod+key:s', 'mod+key:r', 'alt+key:ArrowLeft', 'alt+key:ArrowRight', 'mod+key:ArrowLeft', 'mod+key:ArrowRight', 'key:/', "key:'", 'key:Backspace', 'key:Tab', 'key:Insert', 'key:[', 'key:]'];
		for (const n of [1, 3, 5, 6, 7, 9, 10, 11, 12]) taken.push(`key:F${n}`);
		const used = new Set(bindings.map((b) => strokeId(b.stroke)));
		expect(taken.filter((t) => used.has(t))).toEqual([]);
	});

	it('holds the whole table of the design', () => {
		const at = (key: string, more: Partial<KeyPress> = {}, place: 'bench' | 'rule' | 'anywhere' = 'bench') => commandFor(keymap, place, press(key, more));
		const table: [ReturnType<typeof at>, string][] = [
			[at('ArrowLeft'), 'cursorBack'], [at('ArrowRight', { shiftKey: true }), 'cursorForwardFar'], [at('PageUp'), 'viewBack'], [at('End'), 'goToEnd'],
			[at('ArrowUp'), 'holdPrevious'], [at('T', { shiftKey: true }), 'holdPrevious'], [at('t'), 'holdNext'], [at('3', { code: 'Digit3' }), 'hold3'],
			[at('z'), 'zoomIn'], [at('Z', { shiftKey: true }), 'zoomOut'], [at('0', { code: 'Digit0' }), 'showWhole'], [at('f'), 'fitHeld'], [at('g'), 'goToTime'],
			[at(',', { code: 'Comma' }), 'nudgeBack'], [at('<', { code: 'Comma', shiftKey: true }), 'nudgeBackFar'], [at('≤', { code: 'Comma', altKey: true }), 'nudgeBackFarthest'],
			[at('p'), 'putAtPeak'], [at('l'), 'toggleLock'], [at('o'), 'toggleRule'],
			[at('ArrowLeft', {}, 'rule'), 'nudgeBackFine'], [at('PageUp', {}, 'rule'), 'nudgeForwardFar'], [at('Home', {}, 'rule'), 'putAtPeak'],
			[at('n'), 'nextProposal'], [at('B', { shiftKey: true }), 'previousProposalOfKind'], [at('a'), 'accept'], [at('x'), 'crossOut'],
			[at('e'), 'setEdge'], [at('E', { shiftKey: true }), 'snapEdges'], [at('i'), 'toggleCleaned'], [at('j'), 'note'], [at('Delete'), 'remove'], [at('Enter'), 'openDetail'], [at('Escape'), 'letGo'],
			[at('w'), 'toggleDifference'], [at('k'), 'toggleCadence'], [at('K', { shiftKey: true }), 'toggleCadenceOverPlot'],
			[at('v'), 'vouch'], [at('V', { shiftKey: true }), 'handBack'], [at('Enter', { shiftKey: true }), 'handIn'],
			[at(' '), 'commandList'], [at('F2', {}, 'anywhere'), 'commandList'], [at('?', { shiftKey: true, code: 'Slash' }), 'allKeys'],
			[at('z', { ctrlKey: true }, 'anywhere'), 'undo'], [at('z', { metaKey: true }, 'anywhere'), 'undo'], [at('Z', { ctrlKey: true, shiftKey: true }, 'anywhere'), 'redo']
		];
		for (const [found, wanted] of table) expect(found).toBe(wanted);
	});

	it('finds letters on boards that write other scripts, with Caps Lock, and signs by their place', () => {
		expect(commandFor(keymap, 'bench', press('у', { code: 'KeyE' }))).toBe('setEdge');
		expect(commandFor(keymap, 'bench', press('E'))).toBe('setEdge');
		expect(commandFor(keymap, 'bench', press('&', { code: 'Digit1' }))).toBe('hold1');
		expect(commandFor(keymap, 'bench', press(';', { code: 'Comma' }))).toBe('nudgeBack');
	});

	it('with single keys off, only keys that type nothing or carry Ctrl or Alt act', () => {
		const off = (key: string, more: Partial<KeyPress> = {}, place: 'bench' | 'anywhere' = 'bench') => commandFor(keymap, place, press(key, more), false);
		expect(off('e')).toBeNull();
		expect(off(',', { code: 'Comma' })).toBeNull();
		expect(off('1', { code: 'Digit1' })).toBeNull();
		expect(off('ArrowLeft')).toBe('cursorBack');
		expect(off('z', { ctrlKey: true }, 'anywhere')).toBe('undo');
		expect(off('F2', {}, 'anywhere')).toBe('commandList');
	});

	it('does not take Ctrl+letter for the letter: copy and find stay the browser’s', () => {
		expect(commandFor(keymap, 'bench', press('c', { ctrlKey: true }))).toBeNull();
		expect(commandFor(keymap, 'bench', press('f', { metaKey: true }))).toBeNull();
	});
});

describe('keys in words', () => {
	it('the sheet has every row once, with what stands on the keys', () => {
		const sheet = keySheet(keymap);
		expect(sheet.flatMap((g) => g.rows)).toHaveLength(KEY_ROWS.length + DEFAULT_TAG_KINDS.filter((k) => k.hotkey).length);
		for (const { keys } of sheet.flatMap((g) => g.rows)) expect(keys.length).toBeGreaterThan(0);
		expect(keyCaps({ key: 'z', mod: true, shift: true })).toEqual(['Ctrl', 'Shift', 'Z']);
		expect(keysOf(keymap, 'nudgeBackFarthest')).toEqual(['Alt', ',']);
		expect(keysOf(keymap, 'reopen')).toEqual([]);
	});

	it('the foot line names only keys that would do something now', () => {
		const words = (state: ReturnType<typeof session>) => keyHints(state, keymap).map((h) => h.words);
		expect(words(session())).toContain('offset 0.1 s');
		expect(words(session({}, { heldNumber: 0 }))).not.toContain('offset 0.1 s');
		expect(words(session({ tags: [tag('a', 50, 90, { status: 'proposed' })] }, { heldTagId: 'a' }))).toEqual(['accept', 'cross out', 'edge to the cursor', 'fit', 'let go']);
		const drafting = after(session(), [commandNamed('setEdge') ?? (() => false)]);
		expect(words(drafting)).toContain('drop it');
		expect(words(session({ state: 'in review', can: { align: false, annotate: false, submit: false, review: true, takeBack: false, reopen: false } }))).toContain('vouch');
	});
});
