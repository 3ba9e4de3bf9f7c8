/** A few files of one further session, for a newcomer to drop onto the import page. */
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { DemoSession } from './scenario';
import { simulateDemo, type DemoFile } from './simulated';

const SAMPLE: DemoSession = { seed: 131, activity: 'Hill running', wearer: 'P03', start: '2026-11-20T07:15', minutes: 32, worn: [1, 2], uploadedBy: 'RT', state: 'imported' };

const README = `Three files of one session of the invented Autumn trail study, made by the project's own simulator: the strap (FIT), a watch (TCX) and a band (CSV).
Drop them onto the import page of the demo study; \`npx tsx src/cli/seed/write-sample.ts\` makes them again, byte for byte.
`;

export function sampleFiles(): DemoFile[] {
	return simulateDemo(SAMPLE).files;
}

/** @returns names of the files written */
export function writeSampleFiles(folder: string): string[] {
	mkdirSync(folder, { recursive: true });
	const files = sampleFiles();
	for (const file of files) writeFileSync(join(folder, file.fileName), file.bytes);
	writeFileSync(join(folder, 'README.md'), README);
	return files.map((f) => f.fileName);
}
