/** Says when the first picture stood: after the frame in which the canvas was drawn. */
declare global {
	interface Window {
		/** Milliseconds from navigation to the first picture of the traces. */
		paintedMs?: number;
	}
}

export function painted(): void {
	if (window.paintedMs !== undefined) return;
	requestAnimationFrame(() => {
		window.paintedMs ??= performance.now();
	});
}
