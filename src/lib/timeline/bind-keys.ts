/**
 * Binds the keymap to an element. The listener is hotkeys-js, which knows input fields and the odd ways of modifier
 * keys; which key means what is decided by the keymap, since punctuation goes by its place on the board.
 */
import hotkeys from 'hotkeys-js';
import type { CommandName } from './commands';
import { commandFor, type Keymap, type KeyPlace } from './keymap';

export interface KeyTarget {
	keymap: () => Keymap;
	place: KeyPlace;
	/** Do keys that type a character act? */
	singleKeys: () => boolean;
	run: (command: CommandName) => void;
}

/** Listens on an element (or the document) until the returned function is called. */
export function bindKeys(element: HTMLElement | Document, { keymap, place, singleKeys, run }: KeyTarget): () => void {
	const onKey = (event: KeyboardEvent) => {
		if (event.defaultPrevented || event.isComposing) return;
		const command = commandFor(keymap(), place, event, singleKeys());
		if (!command) return;
		event.preventDefault();
		run(command);
	};
	hotkeys('*', { element }, onKey);
	return () => hotkeys.unbind('*', 'all', onKey);
}
