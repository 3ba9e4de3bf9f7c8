/**
 * Pointer work on the bench: press, drag, release, wheel, double click. Finds out what was touched and speaks to the
 * workstation in times and values, never in pixels. One drag is one move: Escape or a lost pointer puts it back.
 */
import type { BenchActions, EdgeMove, OffsetMove, TagDraft } from './bench-actions';
import type { LaneTag } from './lane-layout';
import { hitLane } from './lane-layout';
import { draggedOffsetS, Travel } from './offset-drag';
import { pxPerS, timeAt, timeX, type TimeFrame } from './time-frame';

/** What the pointer needs to know of the bench at the moment of an event. */
export interface BenchSight {
	frame: TimeFrame;
	whole: TimeFrame;
	lanes: ReadonlyMap<string, LaneTag[]>;
	/** Wearable whose line passes within reach of a place in the plot; the held one first. */
	lineAt(x: number, y: number): string | null;
}

type Drag =
	| { what: 'offset'; recordingId: string; move: OffsetMove | null; travel: Travel; secondsPerPx: number }
	| { what: 'edge'; move: EdgeMove }
	| { what: 'tag'; draft: TagDraft | null; recordingId: string; fromX: number; fromS: number }
	| { what: 'cursor' }
	| { what: 'bracket'; grabbedS: number };

/** A press that moves less than this is a click, px. */
const CLICK_PX = 3;
const EDGE_SNAP_PX = 6;

export class BenchPointer {
	private drag: Drag | null = null;
	private pressedX = 0;
	private moved = false;

	constructor(
		private readonly sight: () => BenchSight,
		private readonly actions: BenchActions
	) {}

	get dragging(): boolean {
		return this.drag !== null;
	}

	/** Where in which field an event happened; null outside the fields. */
	private place(event: MouseEvent): { field: string; recordingId: string | null; x: number; y: number; element: HTMLElement } | null {
		const element = event.target instanceof Element ? event.target.closest<HTMLElement>('[data-field]') : null;
		if (!element) return null;
		const box = element.getBoundingClientRect();
		return { field: element.dataset.field ?? '', recordingId: element.dataset.recording ?? null, x: event.clientX - box.left, y: event.clientY - box.top, element };
	}

	/** @returns true when the event was used, so that the bench can take the focus */
	press(event: PointerEvent): boolean {
		if (event.button !== 0) return false;
		const plate = event.target instanceof Element ? event.target.closest<HTMLElement>('[data-hold]') : null;
		if (plate?.dataset.hold) {
			this.actions.hold(plate.dataset.hold);
			return true;
		}
		const at = this.place(event);
		if (!at) return false;
		const { frame, whole, lanes, lineAt } = this.sight();
		this.pressedX = event.clientX;
		this.moved = false;
		if (at.field === 'strip') {
			const atS = timeAt(at.x, whole);
			const inside = atS >= frame.fromS && atS <= frame.toS;
			const grabbedS = inside ? atS - frame.fromS : (frame.toS - frame.fromS) / 2;
			if (!inside) this.actions.panTo(atS - grabbedS);
			this.drag = { what: 'bracket', grabbedS };
		} else if (at.x > frame.widthPx) return false;
		else if (at.field === 'lane' && at.recordingId) {
			const hit = hitLane(lanes.get(at.recordingId) ?? [], frame, at.x);
			if (hit.what === 'start' || hit.what === 'end') {
				this.actions.holdTag(hit.tag.id);
				const move = this.actions.beginEdge(hit.tag.id, hit.what);
				this.drag = move && { what: 'edge', move };
			} else if (hit.what === 'body') this.actions.holdTag(hit.tag.id);
			else this.drag = { what: 'tag', draft: null, recordingId: at.recordingId, fromX: event.clientX, fromS: timeAt(at.x, frame) };
		} else if (at.field === 'plot') {
			const recordingId = lineAt(at.x, at.y);
			if (recordingId) {
				this.actions.hold(recordingId);
				this.drag = { what: 'offset', recordingId, move: null, travel: new Travel(event.clientX), secondsPerPx: 1 / pxPerS(frame) };
			} else this.drag = { what: 'cursor' };
			this.actions.moveCursor(timeAt(at.x, frame));
		} else {
			this.drag = { what: 'cursor' };
			this.actions.moveCursor(timeAt(at.x, frame));
		}
		if (this.drag && event.currentTarget instanceof Element) event.currentTarget.setPointerCapture(event.pointerId);
		return true;
	}

	/** A drag that began on the slide of the offset rule. */
	pressSlide(event: PointerEvent, recordingId: string, secondsPerPx: number): void {
		if (event.button !== 0) return;
		this.pressedX = event.clientX;
		this.moved = false;
		this.drag = { what: 'offset', recordingId, move: null, travel: new Travel(event.clientX), secondsPerPx };
		if (event.currentTarget instanceof Element) event.currentTarget.setPointerCapture(event.pointerId);
	}

	move(event: PointerEvent, fieldLeft: number): void {
		if (!this.drag) return;
		if (!this.moved && Math.abs(event.clientX - this.pressedX) < CLICK_PX) return;
		this.moved = true;
		const { frame, whole } = this.sight();
		const x = event.clientX - fieldLeft;
		const drag = this.drag;
		if (drag.what === 'bracket') this.actions.panTo(timeAt(x, whole) - drag.grabbedS);
		else if (drag.what === 'cursor') this.actions.moveCursor(timeAt(Math.min(frame.widthPx, Math.max(0, x)), frame));
		else if (drag.what === 'edge') drag.move.to(timeAt(x, frame), !event.altKey, EDGE_SNAP_PX / pxPerS(frame));
		else if (drag.what === 'tag') {
			drag.draft ??= this.actions.beginTag(drag.recordingId, drag.fromS);
			if (drag.draft) drag.draft.to(timeAt(Math.min(frame.widthPx, Math.max(0, x)), frame), !event.altKey, EDGE_SNAP_PX / pxPerS(frame));
			else this.drag = null;
		} else {
			drag.move ??= this.actions.beginOffset(drag.recordingId);
			if (!drag.move) {
				this.drag = null;
				return;
			}
			const travelPx = drag.travel.to(event.clientX, event.shiftKey);
			drag.move.to(draggedOffsetS({ startS: drag.move.startS, secondsPerPx: drag.secondsPerPx, peakS: drag.move.peakS }, travelPx, !event.altKey));
		}
	}

	release(event: PointerEvent): void {
		const drag = this.drag;
		this.drag = null;
		if (!drag) return;
		const keep = event.type === 'pointerup' && this.moved;
		if (drag.what === 'offset') drag.move?.end(keep);
		else if (drag.what === 'edge') drag.move.end(keep);
		else if (drag.what === 'tag') {
			if (drag.draft) drag.draft.end(keep);
			else if (!this.moved) this.actions.moveCursor(drag.fromS);
		}
	}

	/** Puts a drag back; returns whether there was one. */
	cancel(): boolean {
		const drag = this.drag;
		this.drag = null;
		if (!drag) return false;
		if (drag.what === 'offset') drag.move?.end(false);
		else if (drag.what === 'edge') drag.move.end(false);
		else if (drag.what === 'tag') drag.draft?.end(false);
		return true;
	}

	doubleClick(event: MouseEvent): void {
		const at = this.place(event);
		if (!at) return;
		const { frame, lanes } = this.sight();
		const hit = at.field === 'lane' && at.recordingId ? hitLane(lanes.get(at.recordingId) ?? [], frame, at.x) : null;
		if (hit && hit.what !== 'empty') this.actions.fitTag(hit.tag.id);
		else if (at.field === 'strip') this.actions.showWhole();
	}

	/** Vertical wheel pans in time; with Ctrl (or a pinch) it zooms at the pointer. */
	wheel(event: WheelEvent, fieldLeft: number): void {
		const { frame } = this.sight();
		const spanS = frame.toS - frame.fromS;
		const unit = event.deltaMode === 1 ? 16 : event.deltaMode === 2 ? frame.widthPx : 1;
		if (event.ctrlKey) {
			const x = Math.min(frame.widthPx, Math.max(0, event.clientX - fieldLeft));
			this.actions.zoom(Math.exp(Math.max(-120, Math.min(120, event.deltaY * unit)) * 0.0045), timeAt(x, frame));
		} else {
			const travel = Math.abs(event.deltaX) > Math.abs(event.deltaY) ? event.deltaX : event.deltaY;
			this.actions.panTo(frame.fromS + ((travel * unit) / frame.widthPx) * spanS * 0.6);
		}
		event.preventDefault();
	}

	/** The cursor's shape over a place of the bench. */
	shapeAt(event: PointerEvent): string {
		const at = this.place(event);
		if (!at) return '';
		const { frame, lanes, lineAt } = this.sight();
		if (at.field === 'strip') return 'grab';
		if (at.x > frame.widthPx) return '';
		if (at.field === 'plot') return lineAt(at.x, at.y) ? 'ew-resize' : 'crosshair';
		if (at.field !== 'lane' || !at.recordingId) return 'crosshair';
		const { what } = hitLane(lanes.get(at.recordingId) ?? [], frame, at.x);
		return what === 'start' || what === 'end' ? 'col-resize' : what === 'body' ? 'pointer' : 'crosshair';
	}
}

/** Whether a line passes within reach of a place: looks at the values drawn in the few pixels around it. */
export function passesNear(
	valueAtS: (axisS: number) => number | null,
	frame: TimeFrame,
	valueY: (bpm: number) => number,
	x: number,
	y: number,
	reachPx = 6
): boolean {
	for (let dx = -reachPx; dx <= reachPx; dx += 2) {
		const bpm = valueAtS(timeAt(x + dx, frame));
		if (bpm !== null && Math.abs(valueY(bpm) - y) <= reachPx && Math.abs(timeX(timeAt(x + dx, frame), frame) - x) <= reachPx) return true;
	}
	return false;
}
