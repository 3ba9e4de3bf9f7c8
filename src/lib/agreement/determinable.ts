/**
 * A figure is a number, or the plain reason why there is none. The reason travels with the figure to the page; in
 * JSON for programs it is null. Plain objects, so that they survive workers, the database and the page's data.
 */
export interface NotDeterminable {
	/** One sentence. */
	notDeterminable: string;
}

export type Figure = number | NotDeterminable;
/** Lower and upper end. */
export type Interval = [number, number] | NotDeterminable;

export const notDeterminable = (reason: string): NotDeterminable => ({ notDeterminable: reason });

/** True when the figure or interval has a value. */
export function isDetermined<T extends number | [number, number]>(figure: T | NotDeterminable): figure is T {
	return typeof figure === 'number' || Array.isArray(figure);
}

/** The value, or null where there is none. */
export function valueOrNull<T extends number | [number, number]>(figure: T | NotDeterminable): T | null {
	return isDetermined(figure) ? figure : null;
}

/** The reason why there is no value, or null where there is one. */
export function reasonOrNull(figure: number | [number, number] | NotDeterminable): string | null {
	return isDetermined(figure) ? null : figure.notDeterminable;
}
