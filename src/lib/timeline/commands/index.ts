/** Every act of the timeline by its name: what keys, the command list, menus and buttons run. */
import type { TagKind } from '../../agreement/tag';
import type { Command } from '../transaction';
import * as cursor from './cursor';
import * as edge from './edge';
import * as offset from './offset';
import * as proposal from './proposal';
import * as session from './session';
import * as shown from './shown';
import * as tag from './tag';
import * as trace from './trace';

export { alignmentOf } from './offset';
export { draftBetween, moveEdge, setKind } from './edge';
export { goToTime, moveCursorTo, panTo, zoom } from './cursor';
export { holdRecording } from './trace';
export { holdTag, setNote } from './tag';
export { closeBox, showAnalysis } from './shown';
export { nudge, setOffset } from './offset';

export type CommandGroup = 'Cursor and view' | 'Trace' | 'Offset' | 'Tag' | 'Proposals' | 'Show' | 'Session';

interface NamedCommand {
	group: CommandGroup;
	/** As the command list says it. */
	words: string;
	command: Command;
}

const named = (group: CommandGroup, words: string, command: Command): NamedCommand => ({ group, words, command });

/** Commands that need no further word. Those that take a time, a text or a trace are exported above. */
export const COMMANDS = {
	cursorBack: named('Cursor and view', 'Cursor 1 s back', cursor.moveCursorBy(-1)),
	cursorForward: named('Cursor and view', 'Cursor 1 s on', cursor.moveCursorBy(1)),
	cursorBackFar: named('Cursor and view', 'Cursor 10 s back', cursor.moveCursorBy(-10)),
	cursorForwardFar: named('Cursor and view', 'Cursor 10 s on', cursor.moveCursorBy(10)),
	viewBack: named('Cursor and view', 'One view back', cursor.viewBack),
	viewForward: named('Cursor and view', 'One view on', cursor.viewForward),
	goToStart: named('Cursor and view', 'Start of the session', cursor.goToStart),
	goToEnd: named('Cursor and view', 'End of the session', cursor.goToEnd),
	goToTime: named('Cursor and view', 'Go to a time', cursor.askForTime),
	zoomIn: named('Cursor and view', 'Zoom in', cursor.zoomIn),
	zoomOut: named('Cursor and view', 'Zoom out', cursor.zoomOut),
	showWhole: named('Cursor and view', 'Show the whole session', cursor.showWhole),
	fitHeld: named('Cursor and view', 'Fit the held tag', cursor.fitHeld),

	holdNext: named('Trace', 'Next trace', trace.holdNext),
	holdPrevious: named('Trace', 'Previous trace', trace.holdPrevious),
	hold0: named('Trace', 'Hold the reference', trace.holdTrace(0)),
	hold1: named('Trace', 'Hold wearable 1', trace.holdTrace(1)),
	hold2: named('Trace', 'Hold wearable 2', trace.holdTrace(2)),
	hold3: named('Trace', 'Hold wearable 3', trace.holdTrace(3)),
	hold4: named('Trace', 'Hold wearable 4', trace.holdTrace(4)),
	hold5: named('Trace', 'Hold wearable 5', trace.holdTrace(5)),
	hold6: named('Trace', 'Hold wearable 6', trace.holdTrace(6)),

	nudgeBack: named('Offset', 'Offset −0.1 s', offset.nudge(-0.1)),
	nudgeForward: named('Offset', 'Offset +0.1 s', offset.nudge(0.1)),
	nudgeBackFar: named('Offset', 'Offset −1 s', offset.nudge(-1)),
	nudgeForwardFar: named('Offset', 'Offset +1 s', offset.nudge(1)),
	nudgeBackFarthest: named('Offset', 'Offset −10 s', offset.nudge(-10)),
	nudgeForwardFarthest: named('Offset', 'Offset +10 s', offset.nudge(10)),
	nudgeBackFine: named('Offset', 'Offset −0.01 s', offset.nudge(-0.01)),
	nudgeForwardFine: named('Offset', 'Offset +0.01 s', offset.nudge(0.01)),
	putAtPeak: named('Offset', 'Put at peak', offset.putAtPeak),
	toggleLock: named('Offset', 'Lock or unlock', offset.toggleLock),
	toggleRule: named('Offset', 'Open or fold the offset rule', shown.toggleRule),

	setEdge: named('Tag', 'Set an edge at the cursor', edge.setEdge),
	snapEdges: named('Tag', 'Snap both edges', edge.snapEdges),
	toggleCleaned: named('Tag', 'In or out of cleaned', tag.toggleCleaned),
	note: named('Tag', 'Jot a note', tag.askForNote),
	remove: named('Tag', 'Remove', tag.removeTag),
	openDetail: named('Tag', 'Hold the tag at the cursor, or open its detail', tag.openDetail),
	letGo: named('Tag', 'Let go', tag.letGo),

	nextProposal: named('Proposals', 'Next proposal', proposal.nextProposal),
	previousProposal: named('Proposals', 'Previous proposal', proposal.previousProposal),
	nextProposalOfKind: named('Proposals', 'Next proposal of the same kind', proposal.nextProposalOfKind),
	previousProposalOfKind: named('Proposals', 'Previous proposal of the same kind', proposal.previousProposalOfKind),
	accept: named('Proposals', 'Accept', proposal.accept),
	crossOut: named('Proposals', 'Cross out', proposal.crossOut),

	toggleDifference: named('Show', 'Difference strip', shown.toggleDifference),
	toggleCadence: named('Show', 'Cadence lane', shown.toggleCadence),
	toggleCadenceOverPlot: named('Show', 'Cadence over the plot', shown.toggleCadenceOverPlot),
	toggleAnalysis: named('Show', 'Primary or cleaned figures', shown.toggleAnalysis),
	readAsTable: named('Show', 'Read as table', shown.openTable),
	commandList: named('Show', 'Command list', shown.openCommandList),
	allKeys: named('Show', 'All keys', shown.openKeys),

	undo: named('Session', 'Undo', session.undo),
	redo: named('Session', 'Redo', session.redo),
	handIn: named('Session', 'Hand to review', session.askToHandIn),
	takeBack: named('Session', 'Take back from review', session.askToTakeBack),
	vouch: named('Session', 'Vouch', session.askToVouch),
	handBack: named('Session', 'Hand back with a note', session.askToHandBack),
	reopen: named('Session', 'Open again after review', session.askToReopen)
} as const satisfies Record<string, NamedCommand>;

/** Names of commands; `kind:cadence-lock` sets a kind, for every kind that the team has. */
export type CommandName = keyof typeof COMMANDS | `kind:${string}`;

const isFixed = (name: string): name is keyof typeof COMMANDS => Object.hasOwn(COMMANDS, name);

/** The command of a name, or null when there is none. */
export function commandNamed(name: string): Command | null {
	if (name.startsWith('kind:')) return edge.setKind(name.slice(5));
	return isFixed(name) ? COMMANDS[name].command : null;
}

export interface CommandEntry {
	name: CommandName;
	group: CommandGroup;
	words: string;
	/** Set on commands that give a kind. */
	kind: TagKind | null;
}

/** All named commands in their groups, the kinds of the team among them. */
export function commandEntries(kinds: readonly TagKind[]): CommandEntry[] {
	const entries = Object.entries(COMMANDS).map(([name, { group, words }]): CommandEntry => ({ name: isFixed(name) ? name : `kind:${name}`, group, words, kind: null }));
	const afterEdges = entries.findIndex((e) => e.name === 'snapEdges') + 1;
	return entries.toSpliced(afterEdges, 0, ...kinds.map((kind): CommandEntry => ({ name: `kind:${kind.key}`, group: 'Tag', words: kind.name, kind })));
}
