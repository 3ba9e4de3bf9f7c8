/** Where the local parts keep their files: database, mails, secrets, the stamp of the build. */
import { mkdirSync } from 'node:fs';
import { join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

export const PROJECT_ROOT = resolve(fileURLToPath(new URL('../../..', import.meta.url)));

/** `NONIUS_DATA`, else `.data` in the project. Made if it is not there. */
export function dataFolder(env: Record<string, string | undefined> = process.env): string {
	const folder = resolve(PROJECT_ROOT, env.NONIUS_DATA ?? '.data');
	mkdirSync(folder, { recursive: true });
	return folder;
}

export const inData = (...parts: string[]) => join(dataFolder(), ...parts);
