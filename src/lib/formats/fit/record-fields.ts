/**
 * Which fields of a `record` message become which channel, and in which unit.
 *
 * The wider field wins over the older, narrower one for the same quantity, whatever their order in the file.
 *
 * @see FIT profile, message `record` (20) (published by the format's owner; from memory, checked on real files)
 */
import type { ChannelKind } from '../recording';
import { elementSize, readNumber } from './base-types';
import { isWholeElements, type Definition } from './definition';

export interface RecordField {
	/** Column of the sample table. */
	column: string;
	/** Value = raw / scale − offset. */
	scale: number;
	offset: number;
	/** Of two fields for one column the higher rank stays. */
	rank: number;
}

export const RECORD_FIELDS: Record<number, RecordField> = {
	2: { column: 'altitude', scale: 5, offset: 500, rank: 0 },
	3: { column: 'heartRate', scale: 1, offset: 0, rank: 0 },
	4: { column: 'cadence', scale: 1, offset: 0, rank: 0 },
	5: { column: 'distance', scale: 100, offset: 0, rank: 0 },
	6: { column: 'speed', scale: 1000, offset: 0, rank: 0 },
	7: { column: 'power', scale: 1, offset: 0, rank: 0 },
	13: { column: 'temperature', scale: 1, offset: 0, rank: 0 },
	52: { column: 'cadence', scale: 256, offset: 0, rank: 1 },
	53: { column: 'cadenceFraction', scale: 128, offset: 0, rank: 0 },
	73: { column: 'speed', scale: 1000, offset: 0, rank: 1 },
	78: { column: 'altitude', scale: 5, offset: 500, rank: 1 }
};

/** What a developer field says about itself. */
export interface DeveloperField {
	name: string;
	units: string;
	type: number;
	scale: number;
	offset: number;
	/** Field of the record message that it stands for, or NaN. */
	nativeField: number;
}

/** One value to read from each message of a definition. */
export interface ReadStep {
	column: string;
	at: number;
	type: number;
	scale: number;
	offset: number;
	/** True for the three-byte field that packs speed and distance of old sensors. */
	packed: boolean;
}

export interface RecordPlan {
	steps: ReadStep[];
	/** Fields whose size is not a whole number of elements, by field number; left out. */
	oddFields: number[];
}

const DEVELOPER_NAMES: [RegExp, ChannelKind][] = [
	[/^(heart[ _-]?rate|hr|hrm|bpm|pulse)$/i, 'heartRate'],
	[/^cadence$/i, 'cadence'],
	[/^power$/i, 'power'],
	[/^speed$/i, 'speed']
];

/**
 * Plans the reading of one definition of record messages, once for all messages that follow it.
 *
 * @param definition layout of the messages
 * @param developerFields descriptions met so far, by developer index × 256 + field number
 */
export function planRecord(definition: Definition, developerFields: Map<number, DeveloperField>): RecordPlan {
	const best = new Map<string, { step: ReadStep; rank: number }>();
	const oddFields: number[] = [];
	for (const field of definition.fields) {
		if (field.number === 8 && field.size === 3) {
			best.set('packed', {
				step: { column: 'speed', at: field.offset, type: 13, scale: 100, offset: 0, packed: true },
				rank: 0
			});
			continue;
		}
		const target = RECORD_FIELDS[field.number];
		if (!target) continue;
		if (!isWholeElements(field)) {
			oddFields.push(field.number);
			continue;
		}
		const present = best.get(target.column);
		if (present && present.rank >= target.rank) continue;
		best.set(target.column, {
			step: {
				column: target.column,
				at: field.offset,
				type: field.type,
				scale: target.scale,
				offset: target.offset,
				packed: false
			},
			rank: target.rank
		});
	}
	if (best.has('speed')) best.delete('packed');
	const steps = [...best.values()].map((entry) => entry.step);
	for (const field of definition.developerFields) {
		const description = developerFields.get(field.developerIndex * 256 + field.number);
		if (!description) continue;
		const kind =
			RECORD_FIELDS[description.nativeField]?.column ??
			DEVELOPER_NAMES.find(([pattern]) => pattern.test(description.name))?.[1];
		if (!kind || kind === 'cadenceFraction') continue;
		if (field.size < elementSize(description.type) || field.size % elementSize(description.type) !== 0) {
			oddFields.push(field.number);
			continue;
		}
		steps.push({
			column: `developer:${kind}:${description.name}`,
			at: field.offset,
			type: description.type,
			scale: description.scale,
			offset: description.offset,
			packed: false
		});
	}
	return { steps, oddFields };
}

/** Value of one step in the message that begins at `at`, NaN where the file says 'empty'. */
export function readStep(view: DataView, step: ReadStep, at: number, little: boolean): number {
	if (step.packed) {
		const low = view.getUint8(at + step.at);
		const middle = view.getUint8(at + step.at + 1);
		if (low === 0xff && middle === 0xff && view.getUint8(at + step.at + 2) === 0xff) return NaN;
		return (low | ((middle & 0x0f) << 8)) / step.scale;
	}
	// One division at the end keeps 500.2 m from becoming 500.19999999999993 m.
	return (readNumber(view, at + step.at, step.type, little) - step.offset * step.scale) / step.scale;
}
