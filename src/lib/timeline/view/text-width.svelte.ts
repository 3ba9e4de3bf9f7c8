/** Width of a word in the text face at 13 px, as the lanes set it. Measured again when the face has loaded. */
let context: CanvasRenderingContext2D | null = null;
const known = new Map<string, number>();
let loaded = $state(0);

export function textWidth(text: string, italic: boolean): number {
	const key = `${loaded}${italic ? 'i' : 'n'}${text}`;
	let width = known.get(key);
	if (width === undefined) {
		context ??= document.createElement('canvas').getContext('2d');
		if (!context) return text.length * 6.5;
		context.font = `${italic ? 'italic ' : ''}530 13px "Ysabeau Office Variable", sans-serif`;
		width = context.measureText(text).width;
		known.set(key, width);
	}
	return width;
}

/** Widths measured before the face had loaded are wrong: call when it has. */
export function measureTextAgain(): void {
	known.clear();
	loaded++;
}
