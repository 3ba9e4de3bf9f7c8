/** Which element inside a track point is which channel, by local name in any namespace. */
import type { ChannelKind } from '../recording';

const FIELDS: Record<string, ChannelKind | 'strides'> = {
	hr: 'heartRate',
	heartrate: 'heartRate',
	heartratebpm: 'heartRate',
	bpm: 'heartRate',
	pulse: 'heartRate',
	cad: 'cadence',
	cadence: 'cadence',
	runcadence: 'strides',
	speed: 'speed',
	power: 'power',
	powerinwatts: 'power',
	watts: 'power',
	pwr: 'power',
	ele: 'altitude',
	altitude: 'altitude',
	altitudemeters: 'altitude',
	distance: 'distance',
	distancemeters: 'distance',
	atemp: 'temperature',
	temp: 'temperature',
	temperature: 'temperature'
};

/** Channel of an element, `strides` for the cadence that counts one foot by definition; undefined for others. */
export function pointField(name: string): ChannelKind | 'strides' | undefined {
	return FIELDS[name.toLowerCase().replace(/[_-]/g, '')];
}
