/**
 * GPX 1.0 and 1.1 files to recordings.
 *
 * - track points are read; where the file has none with a time, way points and route points are (`points-not-in-track`)
 * - heart rate, cadence, power, speed and temperature are taken from any extension, by local name
 * - several tracks are read as one recording (`several-tracks`), in order of time
 * - cadence is doubled where the track's type says on foot and the values say that they count one foot; where the type
 *   says nothing it is kept (`cadence-unit-unknown`)
 * - positions are passed over
 */
import { assemble } from '../assemble';
import { isOnFoot, toSteps } from '../cadence';
import { UNKNOWN_DEVICE, type Reading, type ReadOptions } from '../recording';
import { TrackPoints } from './track-points';
import { walkXml } from './walk-xml';

export const GPX_READER_VERSION = 'gpx 1';

/** Some exporters write the type of a track as a number. Seen in files; no source. */
const NUMBERED_TYPES: Record<string, string> = { '1': 'cycling', '9': 'running', '10': 'walking', '4': 'hiking' };

/**
 * Reads a GPX file.
 *
 * @param text decoded text
 * @param options what the importer knows
 */
export function readGpx(text: string, options: ReadOptions = {}): Reading {
	const points = new TrackPoints(options);
	const loose = new TrackPoints(options);
	const device = { ...UNKNOWN_DEVICE };
	const types: string[] = [];
	let tracks = 0;
	const report = walkXml(text, {
		open(name, attributes) {
			if (name === 'trkpt') points.begin();
			else if (name === 'wpt' || name === 'rtept') loose.begin();
			else if (name === 'trk') tracks++;
			else if (name === 'gpx' && attributes.creator) device.product = attributes.creator.trim().slice(0, 100) || null;
		},
		close(name, value, path) {
			const parent = path[path.length - 2] ?? '';
			if (name === 'trkpt') points.end();
			else if (name === 'wpt' || name === 'rtept') loose.end();
			else if (points.isOpen) points.element(name, value, parent);
			else if (loose.isOpen) loose.element(name, value, parent);
			else if (name === 'type' && parent === 'trk' && value !== '') {
				const type = (NUMBERED_TYPES[value] ?? value).toLowerCase().slice(0, 60);
				if (!types.includes(type)) types.push(type);
			}
		}
	});
	if (report.refusal) return { ok: false, refusal: report.refusal, warnings: report.warnings };
	const used = points.table.n > 0 || loose.table.n === 0 ? points : loose;
	const warnings = [...report.warnings, ...used.warnings()];
	if (used === loose)
		warnings.push({
			code: 'points-not-in-track',
			message: 'The file has no track with times. Its way points and route points are read instead.'
		});
	if (tracks > 1)
		warnings.push({
			code: 'several-tracks',
			message: `The file holds ${tracks} tracks. They are read as one recording.`
		});
	const activity = types.length === 1 ? types[0] : types.length > 1 ? 'multisport' : null;
	const { table } = used;
	if (activity !== null && isOnFoot(activity)) {
		const warning = toSteps(table, [...new Array(table.n).keys()], activity);
		if (warning) warnings.push(warning);
	} else if (activity === null && table.holds('cadence'))
		warnings.push({
			code: 'cadence-unit-unknown',
			message:
				'The file does not name its activity. The cadence is kept as it is; if it was a run and the values lie near 85, they count one foot only.'
		});
	return assemble(
		{
			format: 'gpx',
			readerVersion: GPX_READER_VERSION,
			device,
			activity,
			table,
			rowWord: 'track point',
			withoutDate: used.withoutDate,
			warnings
		},
		options
	);
}
