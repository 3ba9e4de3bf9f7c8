/** The devices of the scenario: how each behaves, and the files that it writes. */
import { writeCsv, writeFit, writeGpx, writeTcx, type RecordingToWrite } from '../../lib/formats/write';
import type { RecordedDevice } from '../../lib/formats/recording';
import { NO_FAULTS, type Activity, type FaultRates, type SimulatedSession, type SimulatedWearable, type WearableCharacter } from '../../lib/simulate';

export interface DemoDevice {
	/** 0 is the reference. */
	number: number;
	name: string;
	shortName: string;
	role: 'reference' | 'wearable';
	placement: 'chest' | 'wrist' | 'forearm' | 'upper arm';
	/** What its files say of it. */
	device: RecordedDevice;
	extension: string;
	write(recording: RecordingToWrite): Uint8Array;
}

const utf8 = (text: string) => new TextEncoder().encode(text);

export const DEVICES: DemoDevice[] = [
	{
		number: 0, name: 'Halden ECG strap', shortName: 'Halden', role: 'reference', placement: 'chest',
		device: { maker: 'Halden', product: 'Halden ECG strap', serial: '1100417', firmware: '2.10' }, extension: 'fit', write: (r) => writeFit(r)
	},
	{
		number: 1, name: 'Wrenna Loop 2', shortName: 'Wrenna', role: 'wearable', placement: 'wrist',
		device: { maker: 'Wrenna', product: 'Wrenna Loop 2', serial: '2204081', firmware: '3.14' }, extension: 'tcx', write: (r) => utf8(writeTcx(r))
	},
	{
		number: 2, name: 'Ostrel Band', shortName: 'Ostrel', role: 'wearable', placement: 'upper arm',
		device: { maker: 'Ostrel', product: 'Ostrel Band', serial: 'OB-77213', firmware: '1.8' }, extension: 'csv', write: (r) => utf8(writeCsv(r))
	},
	{
		number: 3, name: 'Corvane S', shortName: 'Corvane', role: 'wearable', placement: 'wrist',
		device: { maker: 'Corvane', product: 'Corvane S', serial: null, firmware: '5.02' }, extension: 'gpx', write: (r) => utf8(writeGpx(r))
	}
];

/** A table without a word of its origin, as some exports are. */
export function writeAnonymously(recording: RecordingToWrite): Uint8Array {
	return utf8(writeCsv(recording, { withDevice: false }));
}

/**
 * How the three wearables behave: Wrenna locks on to the steps on hills, Ostrel follows well, Corvane falls to half
 * the rate and loses the signal. Clocks differ by seconds from session to session.
 */
export function characters(activity: Activity, clockOffsetsS: readonly number[]): Partial<WearableCharacter>[] {
	const onHills = activity === 'hill-run';
	const withWeights = activity === 'strength';
	const faults = (rates: Partial<FaultRates>): FaultRates => ({ ...NO_FAULTS, ...rates });
	const steady = { irregular: false, driftPpm: 8 };
	return [
		{
			...steady, tauS: 4, windowS: 5, delayS: 1, noiseSdBpm: 0.7, startsLateS: 8, stopsEarlyS: 4, recordsCadence: true, clockOffsetS: clockOffsetsS[0],
			faults: faults({ 'cadence-lock': onHills ? 0.85 : activity === 'ride-indoor' ? 0.12 : 0, 'motion-artefact': withWeights ? 0.7 : 0.2, 'onset-delay': 0.25, 'missed-peak': withWeights ? 0.2 : 0 })
		},
		{
			...steady, tauS: 3, windowS: 4, delayS: 0.5, noiseSdBpm: 0.4, startsLateS: 3, stopsEarlyS: 30, recordsCadence: false, clockOffsetS: clockOffsetsS[1],
			faults: faults({ 'motion-artefact': withWeights ? 0.25 : 0.05, dropout: 0.06, hold: 0.06, 'missed-peak': withWeights ? 0.08 : 0 })
		},
		{
			...steady, tauS: 6, windowS: 6, delayS: 1.5, noiseSdBpm: 1, startsLateS: 14, stopsEarlyS: 12, recordsCadence: false, clockOffsetS: clockOffsetsS[2],
			faults: faults({ 'half-rate': 0.55, dropout: 0.6, 'motion-artefact': withWeights ? 0.5 : 0.1, hold: 0.15, 'missed-peak': withWeights ? 0.15 : 0 })
		}
	];
}

/** What the strap's recorder writes: heart rate, RR intervals and, where there is any, cadence. */
export function strapRecording(session: SimulatedSession, device: RecordedDevice, activity: string): RecordingToWrite {
	const { heartRate, rrInterval, cadence } = session.reference;
	return { device, activity, traces: [heartRate, rrInterval, ...(cadence ? [cadence] : [])] };
}

export function wearableRecording(wearable: SimulatedWearable, device: RecordedDevice, activity: string): RecordingToWrite {
	return { device, activity, traces: [wearable.heartRate, ...(wearable.cadence ? [wearable.cadence] : [])] };
}
