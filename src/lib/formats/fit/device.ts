/**
 * Who made the file: from `file_id`, `device_info` and `file_creator` messages.
 *
 * Makers are numbers in the file; they stay numbers here (`maker 123`), and so do products without a name of their own.
 */
import type { RecordedDevice } from '../recording';

/** Numbers and names of one `file_id` or `device_info` message; NaN and '' where empty. */
export interface DeviceEntry {
	maker: number;
	product: number;
	productName: string;
	serial: number;
	/** Software version in hundredths. */
	software: number;
	/** 0 = the device that wrote the file. */
	index: number;
	/** Kind of sensor; 120 = heart rate. */
	sensorType: number;
}

const HEART_RATE_SENSOR = 120;

function described(entry: DeviceEntry): RecordedDevice {
	return {
		maker: Number.isNaN(entry.maker) ? null : `maker ${entry.maker}`,
		product: entry.productName || (Number.isNaN(entry.product) ? null : `product ${entry.product}`),
		// All bits set is no serial number, whatever the field's type says about its empty value.
		serial: Number.isNaN(entry.serial) || entry.serial === 0xffffffff ? null : String(entry.serial),
		firmware: Number.isNaN(entry.software) ? null : (entry.software / 100).toFixed(2)
	};
}

/**
 * The device that wrote the file: `file_id` first, what it lacks from the `device_info` of index 0, the software
 * version also from `file_creator`.
 */
export function writingDevice(fileIds: DeviceEntry[], infos: DeviceEntry[], creatorSoftware: number): RecordedDevice {
	const first = fileIds[0];
	const own = infos.filter((info) => info.index === 0);
	const pick = (field: 'maker' | 'product' | 'serial' | 'software'): number =>
		[first, ...own].map((entry) => entry?.[field] ?? NaN).find((value) => !Number.isNaN(value)) ?? NaN;
	const software = pick('software');
	return described({
		maker: pick('maker'),
		product: pick('product'),
		productName: [first, ...own].map((entry) => entry?.productName ?? '').find((name) => name !== '') ?? '',
		serial: pick('serial'),
		software: Number.isNaN(software) ? creatorSoftware : software,
		index: 0,
		sensorType: NaN
	});
}

/** Heart-rate sensors connected to the device that wrote the file, each once. */
export function heartRateSensors(infos: DeviceEntry[]): RecordedDevice[] {
	const sensors = new Map<string, RecordedDevice>();
	for (const info of infos) {
		if (info.sensorType !== HEART_RATE_SENSOR || info.index === 0) continue;
		const sensor = described(info);
		sensors.set(JSON.stringify([sensor.maker, sensor.product, sensor.serial]), sensor);
	}
	return [...sensors.values()];
}
