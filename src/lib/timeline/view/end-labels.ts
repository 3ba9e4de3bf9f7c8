/** Places for the names at the right end of the plot: as near to their line's end as keeps them apart and inside. */
export interface EndLabel {
	number: number;
	name: string;
	/** Where the line ends, px. */
	lineY: number;
}

export interface PlacedEndLabel extends EndLabel {
	labelY: number;
}

export const END_LABEL_GAP_PX = 19;

/**
 * Keeps labels in the order of their lines, `gapPx` apart, each as near to its line as the others allow (pool adjacent
 * violators: labels that push each other form a block that stands at the mean of its members' wishes).
 *
 * @param heightPx height of the plot; labels stay half a gap away from its edges where there is room for all
 */
export function placeEndLabels(labels: readonly EndLabel[], heightPx: number, gapPx = END_LABEL_GAP_PX): PlacedEndLabel[] {
	const sorted = [...labels].sort((a, b) => a.lineY - b.lineY || a.number - b.number);
	const blocks: { sum: number; count: number }[] = [];
	sorted.forEach((label, i) => {
		blocks.push({ sum: label.lineY - i * gapPx, count: 1 });
		while (blocks.length > 1) {
			const [before, last] = blocks.slice(-2);
			if (before.sum / before.count <= last.sum / last.count) break;
			blocks.splice(-2, 2, { sum: before.sum + last.sum, count: before.count + last.count });
		}
	});
	const lowest = gapPx / 2;
	const highest = Math.max(lowest, heightPx - gapPx / 2 - (sorted.length - 1) * gapPx);
	const places = blocks.flatMap((b) => new Array<number>(b.count).fill(Math.min(highest, Math.max(lowest, b.sum / b.count))));
	return sorted.map((label, i) => ({ ...label, labelY: places[i] + i * gapPx }));
}
