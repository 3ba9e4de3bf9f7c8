/** What must hold for every reading, whatever the file was. */
import type { NamedReading } from '../../lib/formats';

/** A sentence for each promise that a reading breaks; empty where it keeps all. */
export function brokenPromises(readings: NamedReading[]): string[] {
	const broken: string[] = [];
	if (readings.length === 0) broken.push('no reading at all');
	for (const { name, reading } of readings) {
		const warnings = reading.ok ? reading.recording.warnings : reading.warnings;
		for (const warning of warnings)
			if (!/^[a-z0-9-]+$/.test(warning.code) || warning.message.length < 10)
				broken.push(`${name}: warning without a sentence (${warning.code})`);
		if (!reading.ok) {
			if (!/^[a-z0-9-]+$/.test(reading.refusal.code) || reading.refusal.message.length < 20)
				broken.push(`${name}: refusal without a sentence`);
			continue;
		}
		const { recording } = reading;
		if (!(recording.endS >= recording.startS) || !Number.isFinite(recording.startS) || !Number.isFinite(recording.endS))
			broken.push(`${name}: span ${recording.startS} to ${recording.endS}`);
		if (!recording.traces.some((trace) => trace.kind === 'heartRate' && trace.tS.length >= 2))
			broken.push(`${name}: accepted without heart rate`);
		if (new Set(recording.traces.map((trace) => trace.kind)).size !== recording.traces.length)
			broken.push(`${name}: a channel twice`);
		for (const { kind, tS, value } of recording.traces) {
			if (tS.length !== value.length || tS.length === 0)
				broken.push(`${name}: ${kind} has ${tS.length} times and ${value.length} values`);
			for (let i = 0; i < tS.length; i++) {
				if (
					Number.isFinite(tS[i]) &&
					Number.isFinite(value[i]) &&
					(i === 0 || tS[i] > tS[i - 1]) &&
					(kind !== 'heartRate' || value[i] > 0)
				)
					continue;
				broken.push(`${name}: ${kind} at ${i}: time ${tS[i]}, value ${value[i]}`);
				break;
			}
		}
	}
	return broken;
}
