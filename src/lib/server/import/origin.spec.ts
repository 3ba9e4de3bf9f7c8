import { describe, expect, it } from 'vitest';
import type { RecordedDevice } from '../../formats/recording';
import { fileStem, guessActivity, guessDevice, guessParticipant, headerSignature, originKey } from './origin';

const device = (over: Partial<RecordedDevice> = {}): RecordedDevice => ({ maker: null, product: null, serial: null, firmware: null, ...over });
const bytes = (text: string) => new TextEncoder().encode(text);
const DEVICES = [
	{ name: 'Halden ECG strap', shortName: 'Halden' },
	{ name: 'Wrenna Loop 2', shortName: 'Wrenna' },
	{ name: 'Ostrel Band', shortName: 'Ostrel' }
];

describe('the key under which a device is remembered', () => {
	it('is the serial number where there is one, whatever the file is called', () => {
		expect(originKey({ format: 'fit', device: device({ serial: '40021', product: 'x' }) }, 'a.fit', bytes(''))).toBe('serial:40021');
	});
	it('is the product where there is no serial number', () => {
		const one = originKey({ format: 'tcx', device: device({ product: 'Ostrel Band' }) }, 'monday.tcx', bytes(''));
		expect(one).toBe(originKey({ format: 'tcx', device: device({ product: 'Ostrel Band' }) }, 'tuesday.tcx', bytes('')));
	});
	it('stays the same for next week’s export of the same kind, and differs for another table', () => {
		const csv = (name: string, head: string) => originKey({ format: 'csv', device: device() }, name, bytes(head));
		expect(csv('corvane_s_1014.csv', 'time,bpm\n1,90')).toBe(csv('corvane_s_1021 (2).csv', 'time,bpm\n7,95'));
		expect(csv('export(3).csv', 'time,bpm\n')).not.toBe(csv('export(3).csv', 'time;pulse;quality\n'));
	});
	it('does not ask again for another wearer, month or activity in the file name', () => {
		expect(fileStem('P03_ostrel_hill-running_14-Oct.csv', ['Hill running'])).toBe('ostrel');
		expect(fileStem('bag/ostrel-2024-10-14.csv.gz')).toBe('ostrel');
	});
	it('finds a header that is not on the first line', () => {
		expect(headerSignature(bytes('# exported\n\nTime,HR (bpm)\n0,90'))).toBe('time,hrbpm');
		expect(headerSignature(bytes('0,90\n1,91'))).toBe('');
	});
});

describe('guesses', () => {
	it('reads the wearer from a code that stands by itself', () => {
		const people = [{ code: 'P03' }, { code: 'P08' }];
		expect(guessParticipant('wrenna-p03-1014.fit', people)?.code).toBe('P03');
		expect(guessParticipant('wrenna-p031.fit', people)).toBeNull();
		expect(guessParticipant('p03-and-p08.fit', people)).toBeNull();
	});
	it('reads the activity from the file, and keeps quiet when two fit', () => {
		const activities = ['Rowing ergometer', 'Hill running', 'Kettlebell circuit', 'Indoor cycling'];
		expect(guessActivity('running', 'x.fit', activities)).toBe('Hill running');
		expect(guessActivity('biking', 'x.tcx', activities)).toBe('Indoor cycling');
		expect(guessActivity(null, 'kettlebell_p03.csv', activities)).toBe('Kettlebell circuit');
		expect(guessActivity('cycling', 'x.fit', [...activities, 'Road cycling'])).toBeNull();
		expect(guessActivity('tennis', 'x.fit', activities)).toBeNull();
	});
	it('suggests the device whose name the file carries', () => {
		expect(guessDevice({ format: 'tcx', device: device({ product: 'Wrenna Loop 2' }) }, 'x.tcx', DEVICES)?.shortName).toBe('Wrenna');
		expect(guessDevice({ format: 'csv', device: device() }, 'ostrel_14-10.csv', DEVICES)?.shortName).toBe('Ostrel');
		expect(guessDevice({ format: 'csv', device: device() }, 'export(3).csv', DEVICES)).toBeNull();
	});
});
