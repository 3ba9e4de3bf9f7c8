/** What the bench asks for, done through the editor's commands. One drag is one gesture and so one step of undo. */
import { draftBetween, holdRecording, holdTag, moveCursorTo, moveEdge, panTo, setOffset, zoom } from '../commands';
import { nearestSnap, snapTargets } from '../snap';
import { heldTrack, tagOf } from '../state';
import { closedBecause } from '../words';
import type { BenchActions } from './bench-actions';
import type { SessionView } from './session-view.svelte';
import { TOO_NARROW } from './session-view.svelte';

/** What is shown of a drag while it lasts. */
export interface DragMarks {
	draft: { recordingId: string; fromS: number; toS: number } | null;
	snap: { recordingId: string; axisS: number } | null;
}

export function editorActions(view: SessionView, marks: DragMarks): BenchActions {
	const { editor } = view;
	const refused = (sentence: string | null): boolean => {
		if (view.readOnly) editor.say(TOO_NARROW);
		else if (sentence) editor.say(sentence);
		else return false;
		return true;
	};
	return {
		hold: (recordingId) => {
			if (heldTrack(editor.state)?.recordingId !== recordingId) editor.run(holdRecording(recordingId));
		},
		holdTag: (tagId) => {
			if (editor.state.heldTagId !== tagId) editor.run(holdTag(tagId));
		},
		moveCursor: (axisS) => {
			if (axisS !== editor.state.cursorS) editor.run(moveCursorTo(axisS));
		},
		panTo: (fromS) => editor.run(panTo(fromS)),
		zoom: (factor, aroundS) => editor.run(zoom(factor, aroundS)),
		fitTag: (tagId) => {
			editor.run(holdTag(tagId));
			editor.run('fitHeld');
		},
		showWhole: () => editor.run('showWhole'),

		beginOffset: (recordingId) => {
			const alignment = view.alignmentOf(recordingId);
			const startS = alignment?.offsetS ?? 0;
			// Asks about a place where it does not stand, so that only a real obstacle refuses.
			const probe = setOffset(recordingId, startS + 1);
			if (view.readOnly) {
				editor.say(TOO_NARROW);
				return null;
			}
			if (!editor.could(probe)) {
				editor.run(probe);
				return null;
			}
			editor.begin();
			return {
				startS,
				peakS: alignment?.estimate?.bestFitShiftS ?? null,
				to: (offsetS) => editor.move(setOffset(recordingId, offsetS)),
				end: (keep) => editor.end(keep)
			};
		},

		beginEdge: (tagId, edge) => {
			if (refused(closedBecause(editor.state.document, 'annotate'))) return null;
			const recordingId = tagOf(editor.state, tagId)?.recordingId;
			if (!recordingId) return null;
			const targets = snapTargets(editor.state, recordingId);
			editor.begin();
			return {
				to: (axisS, snap, reachS) => {
					const at = snap ? nearestSnap(targets, axisS, reachS) : null;
					editor.move(moveEdge(tagId, edge, at ?? axisS));
					marks.snap = at === null ? null : { recordingId, axisS: at };
					return at;
				},
				end: (keep) => {
					marks.snap = null;
					editor.end(keep);
				}
			};
		},

		beginTag: (recordingId, atS) => {
			if (refused(closedBecause(editor.state.document, 'annotate'))) return null;
			const targets = snapTargets(editor.state, recordingId);
			const fromS = atS;
			let toS = atS;
			return {
				fromS,
				to: (axisS, snap, reachS) => {
					const at = snap ? nearestSnap(targets, axisS, reachS) : null;
					toS = at ?? axisS;
					marks.draft = { recordingId, fromS, toS };
					marks.snap = at === null ? null : { recordingId, axisS: at };
				},
				end: (keep) => {
					marks.draft = null;
					marks.snap = null;
					if (keep) editor.run(draftBetween(recordingId, fromS, toS));
				}
			};
		}
	};
}
