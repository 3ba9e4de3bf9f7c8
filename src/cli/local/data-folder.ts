/** Where the local parts keep their files: database, mails, secrets. */
import { mkdirSync } from 'node:fs';
import { resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { StopSentence } from './sentence';

export const PROJECT_ROOT = resolve(fileURLToPath(new URL('../../..', import.meta.url)));

/**
 * `NONIUS_DATA`, else `.data` in the project. Made if it is not there.
 * @throws StopSentence when it cannot be made
 */
export function dataFolder(env: Record<string, string | undefined> = process.env): string {
	return makeFolder(resolve(PROJECT_ROOT, env.NONIUS_DATA || '.data'));
}

/** @throws StopSentence when it cannot be made */
export function makeFolder(folder: string, mode?: number): string {
	try {
		mkdirSync(folder, { recursive: true, mode });
	} catch (cause) {
		throw new StopSentence(`The folder ${folder} cannot be made (${(cause as NodeJS.ErrnoException).code}). Set NONIUS_DATA to a folder that can be written.`);
	}
	return folder;
}
