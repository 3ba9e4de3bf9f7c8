/**
 * Tags as the agreement engine sees them, and the set of tag kinds as data.
 *
 * A tag is [start, end) with a kind on one recording, in epoch seconds on **that recording's own clock**: a fault
 * belongs to the device's samples, so it moves with them when the offset changes.
 */
export type TagTreatment = 'in' | 'out';

/** Which side a kind blames. Only kinds that blame the reference may leave the primary analysis. */
export type TagBlame = 'reference' | 'wearable' | 'neither';

/** Texture of a kind on lanes and in rules (never a colour). */
export const TEXTURES = [
	'flat',
	'hatch',
	'bars',
	'levels',
	'empty',
	'slant',
	'dots',
	'cross',
	'zigzag',
	'peaks',
	'steps',
	'grid'
] as const;
export type Texture = (typeof TEXTURES)[number];

export interface TagKind {
	/** Stable key, kebab-case: `cadence-lock`. */
	key: string;
	/** Word shown: `Cadence lock`. */
	name: string;
	/** Default hotkey, one upper-case letter, or null. */
	hotkey: string | null;
	texture: Texture;
	blames: TagBlame;
	primary: TagTreatment;
	cleaned: TagTreatment;
	/** What it looks like and when to use it, one sentence. */
	meaning: string;
}

/** An accepted tag, ready for pairing. */
export interface PairingTag {
	kind: string;
	startS: number;
	endS: number;
	/** Set when the analyst moved this one tag in or out of the cleaned analysis; null = as the plan says. */
	cleanedOverride: TagTreatment | null;
}
