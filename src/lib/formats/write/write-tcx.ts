/**
 * Recordings as TCX: one activity, one lap, one track. Elements carry the format's names without its vendor's
 * namespace; readers that go by element names, as ours does, take them.
 */
import { isOnFoot } from '../cadence';
import { rowsToWrite, type RecordingToWrite } from './recording-to-write';

/** Text made safe for XML content and attributes. */
export function xmlText(text: string): string {
	return text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}

/** A number as XML writes it, without exponent, up to `decimals` places. */
export function xmlNumber(value: number, decimals: number): string {
	return String(Number(value.toFixed(decimals)));
}

/**
 * Writes a TCX file. Running cadence is written as strides (half the steps), as the format has it. RR intervals have no
 * place in it and are left out.
 *
 * @param recording traces, device and activity
 * @returns the text of the file
 */
export function writeTcx(recording: RecordingToWrite): string {
	const { rows } = rowsToWrite(recording);
	const onFoot = isOnFoot(recording.activity);
	const sport = onFoot ? 'Running' : /cycl|bik|ride/i.test(recording.activity ?? '') ? 'Biking' : 'Other';
	const when = (tS: number) => new Date(tS * 1000).toISOString();
	const start = when(rows[0]?.tS ?? 0);
	const spanS = rows.length ? rows[rows.length - 1].tS - rows[0].tS : 0;
	const distance = rows.findLast((row) => row.values.distance !== undefined)?.values.distance ?? 0;
	const out: string[] = [
		'<?xml version="1.0" encoding="UTF-8"?>',
		'<TrainingCenterDatabase xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xmlns:x="urn:nonius:track-point">',
		`<Activities><Activity Sport="${sport}"><Id>${start}</Id>`,
		`<Lap StartTime="${start}"><TotalTimeSeconds>${xmlNumber(spanS, 3)}</TotalTimeSeconds><DistanceMeters>${xmlNumber(distance, 2)}</DistanceMeters><Calories>0</Calories><Intensity>Active</Intensity><TriggerMethod>Manual</TriggerMethod><Track>`
	];
	for (const { tS, values } of rows) {
		let point = `<Trackpoint><Time>${when(tS)}</Time>`;
		if (values.altitude !== undefined) point += `<AltitudeMeters>${xmlNumber(values.altitude, 2)}</AltitudeMeters>`;
		if (values.distance !== undefined) point += `<DistanceMeters>${xmlNumber(values.distance, 2)}</DistanceMeters>`;
		if (values.heartRate !== undefined)
			point += `<HeartRateBpm><Value>${Math.round(values.heartRate)}</Value></HeartRateBpm>`;
		if (values.cadence !== undefined && !onFoot) point += `<Cadence>${Math.round(values.cadence)}</Cadence>`;
		let extension = '';
		if (values.speed !== undefined) extension += `<x:Speed>${xmlNumber(values.speed, 3)}</x:Speed>`;
		if (values.cadence !== undefined && onFoot)
			extension += `<x:RunCadence>${Math.round(values.cadence / 2)}</x:RunCadence>`;
		if (values.power !== undefined) extension += `<x:Watts>${Math.round(values.power)}</x:Watts>`;
		if (extension) point += `<Extensions><x:TPX>${extension}</x:TPX></Extensions>`;
		out.push(point + '</Trackpoint>');
	}
	const { device } = recording;
	out.push('</Track></Lap>');
	if (device.product !== null || device.serial !== null) {
		const [major, minor] = (device.firmware ?? '0.0').split('.');
		out.push(
			`<Creator xsi:type="Device_t"><Name>${xmlText(device.product ?? '')}</Name><UnitId>${xmlText(device.serial ?? '0')}</UnitId><ProductID>0</ProductID><Version><VersionMajor>${xmlText(major)}</VersionMajor><VersionMinor>${xmlText(minor ?? '0')}</VersionMinor></Version></Creator>`
		);
	}
	out.push('</Activity></Activities></TrainingCenterDatabase>');
	return out.join('\n') + '\n';
}
