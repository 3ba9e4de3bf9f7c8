/** Gathers what matters for a recording while the messages of a FIT file go by. */
import { SampleTable } from '../sample-table';
import { baseTypeOf, elementSize, readNumber, readText } from './base-types';
import type { DeviceEntry } from './device';
import { planRecord, readStep, type DeveloperField, type RecordPlan } from './record-fields';
import { StoredBeatReader } from './stored-beats';
import { isWholeElements, type Definition } from './definition';
import { walkFit, type WalkReport } from './walk';

/** Seconds from 1970 to the beginning of FIT time, 1989-12-31 00:00 UTC. */
export const FIT_EPOCH_S = 631_065_600;

/** Smaller time stamps count from when the device was switched on. */
const FIRST_ABSOLUTE = 0x1000_0000;

/** No device writes more descriptions of itself or more sessions; a file made of nothing else must not fill the memory. */
const MOST_ENTRIES = 10_000;

/** One bout as a `session` message describes it. */
export interface SessionSpan {
	startS: number;
	endS: number;
	sport: number;
}

export interface Collected {
	table: SampleTable;
	report: WalkReport;
	stored: StoredBeatReader['beats'];
	/** Beat intervals, ms, with the clock of the record before each. */
	rrMs: number[];
	rrAnchorS: number[];
	sessions: SessionSpan[];
	/** Sports named by `sport` and `lap` messages, in order. */
	sports: number[];
	fileIds: DeviceEntry[];
	devices: DeviceEntry[];
	creatorSoftware: number;
	/** When the file says that it was begun, epoch seconds, NaN where it does not. */
	createdS: number;
	oddFields: Set<number>;
	/** True where a time stamp counts from the device's start instead of 1989. */
	relativeClock: boolean;
	recordsWithoutTime: number;
}

/** Reads all messages of a FIT file that this project has a use for. Positions are passed over. */
export function collectFit(bytes: Uint8Array): Collected {
	return new Collector(bytes).run();
}

class Collector {
	private readonly view: DataView;
	private readonly table = new SampleTable(4096);
	private readonly storedBeats = new StoredBeatReader();
	/** Weak, because some devices define their records anew before each one. */
	private readonly plans = new WeakMap<Definition, RecordPlan>();
	private readonly developerFields = new Map<number, DeveloperField>();
	private readonly found: Omit<Collected, 'report'>;
	private lastRecordS = NaN;
	/** Intervals that came before any record; they are anchored to the first one. */
	private unanchored = 0;
	private monitoringS = NaN;

	constructor(private readonly bytes: Uint8Array) {
		this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
		this.found = {
			table: this.table,
			stored: this.storedBeats.beats,
			rrMs: [],
			rrAnchorS: [],
			sessions: [],
			sports: [],
			fileIds: [],
			devices: [],
			creatorSoftware: NaN,
			createdS: NaN,
			oddFields: new Set(),
			relativeClock: false,
			recordsWithoutTime: 0
		};
	}

	run(): Collected {
		const report = walkFit(this.bytes, (definition, at, timestamp) => this.message(definition, at, timestamp));
		return { ...this.found, report };
	}

	private message(definition: Definition, at: number, timestamp: number): void {
		const tS = timestamp + FIT_EPOCH_S;
		const { fileIds, devices, sessions } = this.found;
		switch (definition.globalNumber) {
			case 20:
				return this.record(definition, at, timestamp);
			case 78:
				return this.intervals(definition, at, 0, tS);
			case 290:
				return this.intervals(definition, at, 1, tS);
			case 132:
				return this.storedBeats.message(this.view, this.bytes, definition, at, tS);
			case 55:
			case 103:
				return this.monitoring(definition, at, timestamp);
			case 0:
				if (fileIds.length < MOST_ENTRIES)
					fileIds.push(this.device(definition, at, { maker: 1, product: 2, serial: 3, name: 8 }));
				if (Number.isNaN(this.found.createdS)) this.found.createdS = this.number(definition, at, 4) + FIT_EPOCH_S;
				return;
			case 23:
				if (devices.length < MOST_ENTRIES)
					devices.push(
						this.device(definition, at, {
							maker: 2,
							product: 4,
							serial: 3,
							name: 27,
							software: 5,
							index: 0,
							sensorType: 1
						})
					);
				return;
			case 49:
				if (Number.isNaN(this.found.creatorSoftware)) this.found.creatorSoftware = this.number(definition, at, 0);
				return;
			case 18: {
				const startS = this.number(definition, at, 2) + FIT_EPOCH_S;
				const elapsedS = this.number(definition, at, 7) / 1000;
				const sport = this.number(definition, at, 5);
				if (sessions.length < MOST_ENTRIES)
					sessions.push({ startS, endS: Number.isNaN(elapsedS) ? tS : startS + elapsedS, sport });
				return;
			}
			case 12:
				return this.sport(this.number(definition, at, 0));
			case 19:
				return this.sport(this.number(definition, at, 25));
			case 206:
				return this.describeDeveloperField(definition, at);
		}
	}

	private sport(number: number): void {
		if (!Number.isNaN(number) && this.found.sports.length < MOST_ENTRIES) this.found.sports.push(number);
	}

	private record(definition: Definition, at: number, timestamp: number): void {
		let plan = this.plans.get(definition);
		if (!plan) {
			plan = planRecord(definition, this.developerFields);
			this.plans.set(definition, plan);
			for (const number of plan.oddFields) this.found.oddFields.add(number);
		}
		if (timestamp < FIRST_ABSOLUTE) this.found.relativeClock = true;
		let tS = timestamp + FIT_EPOCH_S;
		if (tS !== tS) {
			this.found.recordsWithoutTime++;
			tS = this.lastRecordS;
		}
		const row = this.table.addRow(tS);
		for (const step of plan.steps) {
			const value = readStep(this.view, step, at, definition.little);
			if (value === value) this.table.set(row, step.column, value);
		}
		this.lastRecordS = tS;
		if (this.unanchored > 0 && tS === tS) {
			this.found.rrAnchorS.fill(tS, 0, this.unanchored);
			this.unanchored = 0;
		}
	}

	/** `hrv` messages hold seconds in thousandths and no time of their own; `beat_intervals` hold ms and a time stamp. */
	private intervals(definition: Definition, at: number, fieldNumber: number, tS: number): void {
		const field = definition.fields.find((candidate) => candidate.number === fieldNumber);
		if (!field || !isWholeElements(field)) return;
		const anchor = tS === tS ? tS : this.lastRecordS;
		const size = elementSize(field.type);
		for (let i = 0; i < field.size; i += size) {
			const raw = readNumber(this.view, at + field.offset + i, field.type, definition.little);
			if (!(raw > 0)) continue;
			if (anchor !== anchor) this.unanchored++;
			this.found.rrMs.push(raw);
			this.found.rrAnchorS.push(anchor);
		}
	}

	/** All-day recordings give the low 16 bits of the time and a heart rate now and then. */
	private monitoring(definition: Definition, at: number, timestamp: number): void {
		if (timestamp === timestamp) this.monitoringS = timestamp;
		const low = this.number(definition, at, 26);
		if (low === low && this.monitoringS === this.monitoringS)
			this.monitoringS += (low - (this.monitoringS & 0xffff)) & 0xffff;
		const heartRate = this.number(definition, at, 27);
		if (definition.globalNumber !== 55 || heartRate !== heartRate) return;
		this.table.set(this.table.addRow(this.monitoringS + FIT_EPOCH_S), 'heartRate', heartRate);
	}

	private number(definition: Definition, at: number, fieldNumber: number): number {
		const field = definition.fields.find((candidate) => candidate.number === fieldNumber);
		if (!field || !isWholeElements(field)) return NaN;
		return readNumber(this.view, at + field.offset, field.type, definition.little);
	}

	private text(definition: Definition, at: number, fieldNumber: number): string {
		const field = definition.fields.find((candidate) => candidate.number === fieldNumber);
		return field ? readText(this.bytes, at + field.offset, field.size) : '';
	}

	private device(
		definition: Definition,
		at: number,
		fields: {
			maker: number;
			product: number;
			serial: number;
			name: number;
			software?: number;
			index?: number;
			sensorType?: number;
		}
	): DeviceEntry {
		const optional = (number: number | undefined) => (number === undefined ? NaN : this.number(definition, at, number));
		return {
			maker: this.number(definition, at, fields.maker),
			product: this.number(definition, at, fields.product),
			productName: this.text(definition, at, fields.name),
			serial: this.number(definition, at, fields.serial),
			software: optional(fields.software),
			index: optional(fields.index),
			sensorType: optional(fields.sensorType)
		};
	}

	private describeDeveloperField(definition: Definition, at: number): void {
		const index = this.number(definition, at, 0);
		const number = this.number(definition, at, 1);
		const type = this.number(definition, at, 2);
		if (Number.isNaN(number) || Number.isNaN(type)) return;
		const scale = this.number(definition, at, 6);
		const offset = this.number(definition, at, 7);
		const nativeMessage = this.number(definition, at, 14);
		const nativeField = this.number(definition, at, 15);
		this.developerFields.set((Number.isNaN(index) ? 0 : index) * 256 + number, {
			name: this.text(definition, at, 3),
			units: this.text(definition, at, 8),
			type: baseTypeOf(type),
			scale: scale > 0 ? scale : 1,
			offset: Number.isNaN(offset) ? 0 : offset,
			nativeField: Number.isNaN(nativeMessage) || nativeMessage === 20 ? nativeField : NaN
		});
	}
}
