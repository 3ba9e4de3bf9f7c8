/**
 * The set of tag kinds that every team starts with, and what each kind does to the two analyses.
 *
 * **Primary** counts everything that the wearable reported where the reference is sound; only reference faults
 * leave. **Cleaned** shows how good the device is while it works: the faults of its sensor leave as well. Where a kind
 * is no failed measurement, it stays in:
 * - *rest* is no fault; the dips are part of the session;
 * - *slow response* and *missed peak* are how the device smooths, a property and not a failure: without them the
 *   cleaned figures would say how good the device is only where nothing changes;
 * - *unsure* means that nobody has found a fault; taking it out would take out differences because they are large.
 *
 * Which side a tag blames depends on where it stands (`sideBlamed`): a fault on the reference's own recording is a
 * reference fault, whatever its kind.
 */
import type { TagBlame, TagKind } from './tag';

/** What the treatments rest on: common practice, no source; a team changes them in its plan before it looks at results. */
export const DEFAULT_TAG_KINDS: TagKind[] = [
	{
		key: 'rest',
		name: 'Rest',
		hotkey: 'R',
		texture: 'flat',
		blames: 'neither',
		primary: 'in',
		cleaned: 'in',
		meaning: 'A break in the exercise: heart rate dips on every trace. No fault.'
	},
	{
		key: 'motion-artefact',
		name: 'Motion artefact',
		hotkey: 'M',
		texture: 'hatch',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Jagged readings from shocks, bumps or a loose fit.'
	},
	{
		key: 'cadence-lock',
		name: 'Cadence lock',
		hotkey: 'C',
		texture: 'bars',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Readings follow steps or pedal strokes, or half or twice of them, instead of the heart.'
	},
	{
		key: 'half-rate',
		name: 'Half-rate',
		hotkey: 'H',
		texture: 'levels',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Reads half of the true rate for a while: every second pulse is missed.'
	},
	{
		key: 'dropout',
		name: 'Dropout',
		hotkey: 'D',
		texture: 'empty',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'No value, or a value without meaning, because the signal was lost.'
	},
	{
		key: 'slow-response',
		name: 'Slow response',
		hotkey: 'S',
		texture: 'slant',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'in',
		meaning: 'The right shape, seconds late and rounded: smoothing inside the device.'
	},
	{
		key: 'unsure',
		name: 'Unsure',
		hotkey: 'U',
		texture: 'dots',
		blames: 'neither',
		primary: 'in',
		cleaned: 'in',
		meaning: 'Something is odd and it is not clear what. Stays in until it is settled.'
	},
	{
		key: 'reference-fault',
		name: 'Reference fault',
		hotkey: 'Q',
		texture: 'cross',
		blames: 'reference',
		primary: 'out',
		cleaned: 'out',
		meaning: 'The strap is wrong: dry electrodes, static from clothing, slipped, radio loss. Put it on the reference.'
	},
	{
		key: 'missed-peak',
		name: 'Missed peak',
		hotkey: 'Y',
		texture: 'peaks',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'in',
		meaning: 'A short peak is absent or flattened, above all in strength work.'
	},
	{
		key: 'double-rate',
		name: 'Double rate',
		hotkey: null,
		texture: 'grid',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Reads twice the true rate: a second wave in the pulse is counted.'
	},
	{
		key: 'hold',
		name: 'Hold',
		hotkey: null,
		texture: 'steps',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'One value frozen while the heart moves: the device bridges a bad signal.'
	},
	{
		key: 'spike',
		name: 'Spike',
		hotkey: null,
		texture: 'zigzag',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Single wild values.'
	},
	{
		key: 'onset-delay',
		name: 'Onset delay',
		hotkey: null,
		// Shares its texture with slow response, also a lateness; the word tells them apart.
		texture: 'slant',
		blames: 'wearable',
		primary: 'in',
		cleaned: 'out',
		meaning: 'Wrong for the first one or two minutes: the device has not locked on to the pulse.'
	}
];

/**
 * The side that a tag blames, from its kind and the recording it stands on.
 *
 * A fault kind on the reference's recording blames the reference (a strap drops out too). A kind that blames the
 * reference says nothing about a wearable's recording: there it blames neither, so that nothing that stands on a
 * wearable can take its readings out of the primary analysis.
 */
export function sideBlamed(kind: Pick<TagKind, 'blames'>, recordingRole: 'reference' | 'wearable'): TagBlame {
	if (kind.blames === 'neither') return 'neither';
	if (recordingRole === 'reference') return 'reference';
	return kind.blames === 'wearable' ? 'wearable' : 'neither';
}
