/**
 * TCX files to recordings.
 *
 * - several activities, laps and tracks are read as one recording (`several-activities`), in order of time
 * - `RunCadence` counts one foot by definition and is doubled; a plain `Cadence` of a run is doubled where its values
 *   say that it counts one foot
 * - heart rate is taken from `HeartRateBpm/Value`, from `HeartRateBpm` itself, or from any extension
 * - positions are passed over
 */
import { assemble } from '../assemble';
import { isOnFoot, toSteps } from '../cadence';
import { UNKNOWN_DEVICE, type Reading, type ReadOptions, type RecordedDevice } from '../recording';
import { counted } from '../time-text';
import { TrackPoints } from './track-points';
import { walkXml } from './walk-xml';

export const TCX_READER_VERSION = 'tcx 1';

/**
 * Reads a TCX file.
 *
 * @param text decoded text
 * @param options what the importer knows
 */
export function readTcx(text: string, options: ReadOptions = {}): Reading {
	const points = new TrackPoints(options);
	const device: RecordedDevice = { ...UNKNOWN_DEVICE };
	const sports: string[] = [];
	let activities = 0;
	let creators = 0;
	let major = '';
	const report = walkXml(text, {
		open(name, attributes) {
			if (name === 'Trackpoint') points.begin();
			else if (name === 'Activity') {
				activities++;
				const sport = attributes.Sport?.trim().toLowerCase();
				if (sport && !sports.includes(sport)) sports.push(sport);
			} else if (name === 'Creator') creators++;
		},
		close(name, value, path) {
			const parent = path[path.length - 2] ?? '';
			if (name === 'Trackpoint') points.end();
			else if (points.isOpen) points.element(name, value, parent);
			else if (creators === 1 && path.includes('Creator') && value !== '') {
				if (name === 'Name') device.product = value;
				else if (name === 'UnitId') device.serial = value === '0' ? null : value;
				else if (name === 'VersionMajor') major = value;
				else if (name === 'VersionMinor' && !(major === '0' && value === '0')) device.firmware = `${major}.${value}`;
			}
		}
	});
	if (report.refusal) return { ok: false, refusal: report.refusal, warnings: report.warnings };
	const warnings = [...report.warnings, ...points.warnings()];
	if (activities > 1)
		warnings.push({
			code: 'several-activities',
			message: `The file holds ${activities} activities (${sports.join(', ')}). They are read as one recording.`
		});
	const activity = sports.length === 1 ? sports[0] : sports.length > 1 ? 'multisport' : null;
	const { table, strideRows } = points;
	const cadence = table.column('cadence');
	if (cadence && strideRows.length > 0) {
		for (const row of strideRows) cadence[row] *= 2;
		if (strideRows.some((row) => cadence[row] > 0))
			warnings.push({
				code: 'cadence-doubled',
				message: `${counted(strideRows.length, 'cadence value')} stand in the element for strides, which counts one foot. They are doubled to steps a minute.`
			});
	}
	if (cadence && strideRows.length === 0 && activity !== null && isOnFoot(activity)) {
		const warning = toSteps(table, [...new Array(table.n).keys()], activity);
		if (warning) warnings.push(warning);
	}
	return assemble(
		{
			format: 'tcx',
			readerVersion: TCX_READER_VERSION,
			device,
			activity,
			table,
			rowWord: 'track point',
			withoutDate: points.withoutDate,
			warnings
		},
		options
	);
}
