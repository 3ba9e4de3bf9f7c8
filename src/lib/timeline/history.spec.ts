import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { alignment, after, session, START_S, tag } from './testing/session-in-hand';
import { COMMANDS, commandEntries, commandNamed, moveCursorTo, setOffset } from './commands';
import { alignmentContent, setChanged, tagContent } from './history';
import type { EditorState } from './state';
import type { Command } from './transaction';

const parts = ({ tags, alignments }: EditorState) => ({
	tags: tags.filter((t) => t.status !== 'removed').map(tagContent),
	alignments: Object.fromEntries(Object.entries(alignments).map(([id, a]) => [id, alignmentContent(a)]))
});

describe('undo and redo', () => {
	it('whatever was done, undoing all of it gives the session back, and redoing all of it gives the work back', () => {
		const names = commandEntries(session().document.kinds).map((e) => e.name).filter((n) => n !== 'undo' && n !== 'redo');
		const anyCommand = fc.oneof(
			{ weight: 3, arbitrary: fc.constantFrom(...names) },
			{ weight: 2, arbitrary: fc.constantFrom<(typeof names)[number]>('setEdge', 'kind:rest', 'accept', 'nextProposal', 'remove', 'nudgeForward') },
			{ weight: 2, arbitrary: fc.integer({ min: 0, max: 600 }) }
		);
		fc.assert(
			fc.property(fc.array(anyCommand, { maxLength: 40 }), (acts) => {
				const start = session({
					tags: [tag('a', 50, 100), tag('b', 120, 180, { status: 'proposed' }), tag('c', 90, 140, { recordingId: 'ostrel', status: 'proposed', kind: 'dropout' })]
				});
				const commands = acts.map((act): Command => (typeof act === 'number' ? moveCursorTo(START_S + act) : (commandNamed(act) ?? (() => false))));
				const worked = after(start, commands);
				const back = after(worked, Array.from({ length: worked.history.done.length }, () => COMMANDS.undo.command));
				expect(parts(back)).toEqual(parts(start));
				expect(back.history.done).toHaveLength(0);
				const again = after(back, Array.from({ length: back.history.undone.length }, () => COMMANDS.redo.command));
				expect(parts(again)).toEqual(parts(worked));
			}),
			{ numRuns: 150 }
		);
	});

	it('asking whether a command could act changes nothing and agrees with what it then does', () => {
		const state = session({ tags: [tag('a', 50, 100), tag('b', 120, 180, { status: 'proposed' })] });
		for (const { name } of commandEntries(state.document.kinds)) {
			const command = commandNamed(name);
			let acted = false;
			const could = command?.(state);
			const did = command?.(state, ({ patch }) => (acted = Object.keys(patch).length > 0));
			expect(did, name).toBe(could);
			expect(acted, name).toBe(could);
		}
	});

	it('no command is swallowed without a sign: it changes something or says why not', () => {
		const states = [session(), session({ tags: [tag('a', 50, 100)] }, { heldTagId: 'a' }), session({ tracks: [] }), session({ state: 'reviewed', can: { align: false, annotate: false, submit: false, review: false, takeBack: false, reopen: true } })];
		for (const state of states)
			for (const { name } of commandEntries(state.document.kinds)) {
				let sign = false;
				commandNamed(name)?.(state, ({ patch, say }) => (sign ||= Object.keys(patch).length > 0 || Boolean(say)));
				expect(sign, `${name} in a session that is ${state.document.state}`).toBe(true);
			}
	});

	it('a new act after undo takes redo away', () => {
		const state = after(session(), [COMMANDS.nudgeForward.command, COMMANDS.undo.command, COMMANDS.nudgeBack.command]);
		expect(state.history.undone).toHaveLength(0);
		expect(after(state, [COMMANDS.redo.command]).said?.text).toBe('Nothing to do again.');
	});

	it('does not overwrite unseen what a colleague changed since: the first press says so, the second does it', () => {
		const mine = after(session(), [setOffset('wrenna', 5)]);
		const theirs = { ...mine, ...setChanged(mine, [{ of: 'alignment', recordingId: 'wrenna', before: null, after: alignmentContent(alignment(7, { method: 'hand' })) }], 'after') };
		const warned = after(theirs, [COMMANDS.undo.command]);
		expect(warned.alignments.wrenna.offsetS).toBe(7);
		expect(warned.said?.text).toContain('colleague');
		expect(after(warned, [COMMANDS.undo.command]).alignments.wrenna.offsetS).toBe(3);
	});
});
