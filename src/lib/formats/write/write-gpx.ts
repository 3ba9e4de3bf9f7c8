/**
 * Recordings as GPX 1.1 with the usual track-point extension.
 *
 * A GPX track point must have a position; this project keeps none, so every point stands at 0, 0 and a note says so.
 */
import { isOnFoot } from '../cadence';
import { rowsToWrite, type RecordingToWrite } from './recording-to-write';
import { xmlNumber, xmlText } from './write-tcx';

/**
 * Writes a GPX file. Cadence on foot is written as strides (half the steps), as devices do.
 *
 * @param recording traces, device and activity
 * @returns the text of the file
 */
export function writeGpx(recording: RecordingToWrite): string {
	const { rows } = rowsToWrite(recording);
	const onFoot = isOnFoot(recording.activity);
	const out: string[] = [
		'<?xml version="1.0" encoding="UTF-8"?>',
		`<gpx version="1.1" creator="${xmlText(recording.device.product ?? 'unknown')}" xmlns="http://www.topografix.com/GPX/1/1" xmlns:tpx="urn:nonius:track-point">`,
		'<metadata><desc>Positions were removed; every point stands at 0, 0.</desc></metadata>',
		`<trk>${recording.activity ? `<type>${xmlText(recording.activity)}</type>` : ''}<trkseg>`
	];
	for (const { tS, values } of rows) {
		let point = '<trkpt lat="0" lon="0">';
		if (values.altitude !== undefined) point += `<ele>${xmlNumber(values.altitude, 2)}</ele>`;
		point += `<time>${new Date(tS * 1000).toISOString()}</time>`;
		let extension = '';
		if (values.temperature !== undefined) extension += `<tpx:atemp>${xmlNumber(values.temperature, 1)}</tpx:atemp>`;
		if (values.heartRate !== undefined) extension += `<tpx:hr>${Math.round(values.heartRate)}</tpx:hr>`;
		if (values.cadence !== undefined)
			extension += `<tpx:cad>${Math.round(onFoot ? values.cadence / 2 : values.cadence)}</tpx:cad>`;
		if (values.speed !== undefined) extension += `<tpx:speed>${xmlNumber(values.speed, 3)}</tpx:speed>`;
		const power = values.power === undefined ? '' : `<power>${Math.round(values.power)}</power>`;
		if (extension || power)
			point += `<extensions>${power}${extension ? `<tpx:TrackPointExtension>${extension}</tpx:TrackPointExtension>` : ''}</extensions>`;
		out.push(point + '</trkpt>');
	}
	out.push('</trkseg></trk></gpx>');
	return out.join('\n') + '\n';
}
