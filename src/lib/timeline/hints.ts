/** The keys that matter right now, for the foot line: what is held decides. */
import { commandNamed, type CommandName } from './commands';
import { keysOf, type Keymap } from './keymap';
import { heldTag, heldWearable, type EditorState } from './state';

export interface KeyHint {
	keys: string[];
	words: string;
}

type Hint = readonly [words: string, ...commands: CommandName[]];

function wanted(state: EditorState): Hint[] {
	const { can, state: at } = state.document;
	if (at === 'in review' && can.review) return [['vouch', 'vouch'], ['hand back', 'handBack'], ['trace', 'holdPrevious', 'holdNext'], ['tag at the cursor', 'openDetail'], ['commands', 'commandList']];
	if (state.draft)
		return [...(state.draft.endS === null ? ([['end of the tag', 'setEdge']] as Hint[]) : []), ...state.document.kinds.filter((k) => k.hotkey).map((k): Hint => [k.name.toLowerCase(), `kind:${k.key}`]), ['drop it', 'letGo']];
	const tag = heldTag(state);
	if (tag?.status === 'proposed') return [['accept', 'accept'], ['cross out', 'crossOut'], ['next', 'nextProposal'], ['edge to the cursor', 'setEdge'], ['fit', 'fitHeld'], ['let go', 'letGo']];
	if (tag) return [['edge to the cursor', 'setEdge'], ['in or out of cleaned', 'toggleCleaned'], ['note', 'note'], ['remove', 'remove'], ['fit', 'fitHeld'], ['let go', 'letGo']];
	const shared: Hint[] = [['tag', 'setEdge'], ['next proposal', 'nextProposal'], ['commands', 'commandList']];
	return heldWearable(state) && can.align ? [['offset 0.1 s', 'nudgeBack', 'nudgeForward'], ['peak', 'putAtPeak'], ['lock', 'toggleLock'], ...shared] : [['trace', 'holdPrevious', 'holdNext'], ...shared];
}

/** What the foot line shows: only what would do something. */
export function keyHints(state: EditorState, keymap: Keymap): KeyHint[] {
	return wanted(state).flatMap(([words, ...commands]) => {
		const able = commands.filter((name) => commandNamed(name)?.(state) ?? false);
		const keys = able.map((name) => keysOf(keymap, name).join(' ')).filter((k) => k !== '');
		return keys.length > 0 ? [{ keys, words }] : [];
	});
}
