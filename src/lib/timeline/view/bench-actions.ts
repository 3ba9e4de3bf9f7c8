/** What the bench asks for when it is touched: the workstation does it through the editor's commands. */
export interface BenchActions {
	hold(recordingId: string): void;
	holdTag(tagId: string): void;
	moveCursor(axisS: number): void;
	/** Shows the same length of time from here on. */
	panTo(fromS: number): void;
	/** Shows `factor` times as much time, with what stands at `aroundS` staying where it is. */
	zoom(factor: number, aroundS: number): void;
	fitTag(tagId: string): void;
	showWhole(): void;
	/** Begins to move the offset of a wearable; false when it does not move, which has been said. */
	beginOffset(recordingId: string): OffsetMove | null;
	/** Begins to move an edge of a tag; null when it does not move, which has been said. */
	beginEdge(tagId: string, edge: 'start' | 'end'): EdgeMove | null;
	/** Begins a new tag on an empty lane; null when tags cannot be made here, which has been said. */
	beginTag(recordingId: string, atS: number): TagDraft | null;
}

export interface OffsetMove {
	startS: number;
	peakS: number | null;
	to(offsetS: number): void;
	/** Ends the move as one step, or puts everything back. */
	end(keep: boolean): void;
}

export interface EdgeMove {
	/** Moves the edge to a time on the axis; returns where it snapped to, or null. */
	to(axisS: number, snap: boolean, reachS: number): number | null;
	end(keep: boolean): void;
}

export interface TagDraft {
	fromS: number;
	to(axisS: number, snap: boolean, reachS: number): void;
	end(keep: boolean): void;
}
