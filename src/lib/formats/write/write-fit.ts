/**
 * Recordings as FIT activity files: file_id, device_info, records, hrv, lap, session, activity, with right check sums.
 *
 * FIT records count whole seconds; times are rounded down to the second. Cadence on foot is written as strides (half),
 * as devices do, with the half stride in the fraction field.
 */
import { isOnFoot } from '../cadence';
import { FIT_EPOCH_S } from '../fit/collect';
import { sportNumber } from '../fit/sports';
import { ENUM, FitBytes, SINT8, STRING, UINT16, UINT32, UINT32Z, UINT8, type FieldToWrite } from './fit-bytes';
import { rowsToWrite, type RecordingToWrite } from './recording-to-write';

export interface WriteFitOptions {
	/** Number of the maker; 255 is the format's own number for development. */
	makerNumber?: number;
	productNumber?: number;
	bigEndian?: boolean;
	/** False leaves data size and check sum at 0, as a device does that never closed the file. */
	finished?: boolean;
}

const NAME_SIZE = 32;

/**
 * Writes a FIT activity file.
 *
 * @param recording traces, device and activity; the serial must be a whole number up to 4294967294 and the firmware a
 *   decimal number up to 655.34, because the format has no room for others
 * @param options numbers of maker and product, byte order
 * @returns the bytes of the file
 * @throws RangeError where serial or firmware do not fit the format, or a time stamp lies before 1990
 */
export function writeFit(recording: RecordingToWrite, options: WriteFitOptions = {}): Uint8Array {
	const { rows, intervals } = rowsToWrite(recording);
	const { device } = recording;
	const serial = device.serial === null ? 0 : Number(device.serial);
	if (!Number.isInteger(serial) || serial < 0 || serial > 0xfffffffe)
		throw new RangeError(`A FIT file cannot hold the serial '${device.serial}': it takes whole numbers only.`);
	const software = device.firmware === null ? 0xffff : Math.round(Number(device.firmware) * 100);
	if (!(software >= 0 && software <= 0xffff))
		throw new RangeError(`A FIT file cannot hold the firmware '${device.firmware}': it takes a number such as 4.12.`);
	const startS = Math.floor(Math.min(rows[0]?.tS ?? Infinity, intervals?.tS[0] ?? Infinity));
	const endS = Math.floor(Math.max(rows.at(-1)?.tS ?? -Infinity, intervals?.tS.at(-1) ?? -Infinity));
	if (!(startS >= FIT_EPOCH_S)) throw new RangeError('A FIT file cannot hold times before 1990.');
	const out = new FitBytes(!options.bigEndian);
	const start = startS - FIT_EPOCH_S;
	const end = endS - FIT_EPOCH_S;
	const maker = options.makerNumber ?? 255;
	const product = options.productNumber ?? 1;
	const sport = sportNumber(recording.activity);

	out.define(0, 0, [
		[0, ENUM],
		[1, UINT16],
		[2, UINT16],
		[3, UINT32Z],
		[4, UINT32],
		[8, STRING, NAME_SIZE]
	]);
	out.put(0, UINT8);
	out.put(4, ENUM);
	out.put(maker, UINT16);
	out.put(product, UINT16);
	out.put(serial, UINT32Z);
	out.put(start, UINT32);
	out.text(device.product ?? '', NAME_SIZE);

	out.define(1, 23, [
		[253, UINT32],
		[3, UINT32Z],
		[2, UINT16],
		[4, UINT16],
		[5, UINT16],
		[0, UINT8],
		[27, STRING, NAME_SIZE]
	]);
	out.put(1, UINT8);
	out.put(start, UINT32);
	out.put(serial, UINT32Z);
	out.put(maker, UINT16);
	out.put(product, UINT16);
	out.put(software, UINT16);
	out.put(0, UINT8);
	out.text(device.product ?? '', NAME_SIZE);

	writeRecords(out, rows, intervals, isOnFoot(recording.activity));

	const elapsedMs = (end - start) * 1000;
	out.define(2, 19, [
		[253, UINT32],
		[2, UINT32],
		[7, UINT32],
		[8, UINT32],
		[25, ENUM]
	]);
	out.put(2, UINT8);
	for (const value of [end, start, elapsedMs, elapsedMs]) out.put(value, UINT32);
	out.put(sport, ENUM);
	out.define(3, 18, [
		[253, UINT32],
		[2, UINT32],
		[7, UINT32],
		[8, UINT32],
		[5, ENUM],
		[25, UINT16],
		[26, UINT16]
	]);
	out.put(3, UINT8);
	for (const value of [end, start, elapsedMs, elapsedMs]) out.put(value, UINT32);
	out.put(sport, ENUM);
	out.put(0, UINT16);
	out.put(1, UINT16);
	out.define(4, 34, [
		[253, UINT32],
		[0, UINT32],
		[1, UINT16],
		[2, ENUM],
		[3, ENUM],
		[4, ENUM]
	]);
	out.put(4, UINT8);
	out.put(end, UINT32);
	out.put(elapsedMs, UINT32);
	out.put(1, UINT16);
	out.put(0, ENUM);
	out.put(26, ENUM);
	out.put(1, ENUM);
	return out.finish(options.finished ?? true);
}

const RECORDS = 5;
const INTERVALS = 6;

function writeRecords(
	out: FitBytes,
	rows: ReturnType<typeof rowsToWrite>['rows'],
	intervals: ReturnType<typeof rowsToWrite>['intervals'],
	onFoot: boolean
): void {
	const present = (kind: keyof (typeof rows)[number]['values']) => rows.some((row) => row.values[kind] !== undefined);
	const has = {
		heartRate: present('heartRate'),
		cadence: present('cadence'),
		speed: present('speed'),
		power: present('power'),
		altitude: present('altitude'),
		distance: present('distance'),
		temperature: present('temperature')
	};
	const fields: FieldToWrite[] = [[253, UINT32]];
	if (has.heartRate) fields.push([3, UINT8]);
	if (has.cadence) fields.push([4, UINT8], [53, UINT8]);
	if (has.speed) fields.push([73, UINT32]);
	if (has.power) fields.push([7, UINT16]);
	if (has.altitude) fields.push([78, UINT32]);
	if (has.distance) fields.push([5, UINT32]);
	if (has.temperature) fields.push([13, SINT8]);
	out.define(RECORDS, 20, fields);
	if (intervals) out.define(INTERVALS, 78, [[0, UINT16, 10]]);
	const scaled = (value: number | undefined, scale: number, offset: number, empty: number, type: number) =>
		out.put(value === undefined ? empty : Math.max(0, Math.min(empty - 1, Math.round((value + offset) * scale))), type);
	let beat = 0;
	const beatsUntil = (tS: number) => {
		const count = intervals?.tS.length ?? 0;
		while (intervals && beat < count && intervals.tS[beat] < tS) {
			out.put(INTERVALS, UINT8);
			for (let i = 0; i < 5; i++) {
				const inside = beat < count && intervals.tS[beat] < tS;
				out.put(inside ? Math.min(0xfffe, Math.round(intervals.value[beat++])) : 0xffff, UINT16);
			}
		}
	};
	for (const { tS, values } of rows) {
		beatsUntil(Math.floor(tS));
		out.put(RECORDS, UINT8);
		out.put(Math.floor(tS) - FIT_EPOCH_S, UINT32);
		if (has.heartRate) scaled(values.heartRate, 1, 0, 0xff, UINT8);
		if (has.cadence) {
			const turns = values.cadence === undefined ? undefined : onFoot ? values.cadence / 2 : values.cadence;
			const whole = turns === undefined ? undefined : Math.floor(turns);
			scaled(whole, 1, 0, 0xff, UINT8);
			scaled(turns === undefined || whole === undefined ? undefined : turns - whole, 128, 0, 0xff, UINT8);
		}
		if (has.speed) scaled(values.speed, 1000, 0, 0xffffffff, UINT32);
		if (has.power) scaled(values.power, 1, 0, 0xffff, UINT16);
		if (has.altitude) scaled(values.altitude, 5, 500, 0xffffffff, UINT32);
		if (has.distance) scaled(values.distance, 100, 0, 0xffffffff, UINT32);
		if (has.temperature)
			out.put(
				values.temperature === undefined ? 0x7f : Math.max(-127, Math.min(126, Math.round(values.temperature))),
				SINT8
			);
	}
	beatsUntil(Infinity);
}
