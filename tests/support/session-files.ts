/** Files of simulated sessions, as devices write them. */
import { writeCsv, writeFit, writeTcx } from '../../src/lib/formats/write';
import { simulateSession, type Activity } from '../../src/lib/simulate';
import type { UploadedFile } from '../../src/lib/server/import/receive';

export interface SessionFilesRequest {
	seed: number;
	activity?: Activity;
	/** Epoch seconds. */
	startS?: number;
	minutes?: number;
	wearer?: string;
	/** Seconds that the watch's clock is behind the strap's. */
	watchOffsetS?: number;
	/** What the strap's file calls itself. */
	strapSerial?: string;
}

/** A strap (FIT), a watch (TCX) and a band (CSV without a word of its origin). */
export function sessionFiles(request: SessionFilesRequest): { strap: UploadedFile; watch: UploadedFile; band: UploadedFile } {
	const { seed, activity = 'hill-run', startS = Date.UTC(2026, 9, 14, 7, 31) / 1000, minutes = 30, wearer = 'p03', watchOffsetS = 3, strapSerial = '1100417' } = request;
	const session = simulateSession({
		seed, activity, startS, durationS: minutes * 60, preset: 'lag', referenceFault: false,
		wearables: [
			{ tauS: 3, windowS: 4, delayS: 1, irregular: false, startsLateS: 5, stopsEarlyS: 5, clockOffsetS: watchOffsetS },
			{ tauS: 2, windowS: 4, delayS: 0.5, irregular: false, startsLateS: 2, stopsEarlyS: 20, clockOffsetS: -1 }
		]
	});
	const [watch, band] = session.wearables;
	const text = (content: string) => new TextEncoder().encode(content);
	const day = new Date(startS * 1000).toISOString().slice(0, 10);
	return {
		strap: {
			fileName: `halden_${day}_${seed}.fit`,
			bytes: writeFit({ device: { maker: 'Halden', product: 'Halden ECG strap', serial: strapSerial, firmware: '2.10' }, activity: 'running', traces: [session.reference.heartRate, session.reference.rrInterval] })
		},
		watch: {
			fileName: `wrenna-${wearer}-${day}.tcx`,
			bytes: text(writeTcx({ device: { maker: 'Wrenna', product: 'Wrenna Loop 2', serial: '2204081', firmware: '3.14' }, activity: 'running', traces: [watch.heartRate] }))
		},
		band: { fileName: `export ${day}.csv`, bytes: text(writeCsv({ device: { maker: null, product: null, serial: null, firmware: null }, activity: null, traces: [band.heartRate] }, { withDevice: false })) }
	};
}
