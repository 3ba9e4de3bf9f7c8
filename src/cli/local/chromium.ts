/** Debian's Chromium for the journeys in the browser. */
import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { installDebianPackage, isRoot } from './debian-package';
import { StopSentence } from './sentence';

/** Path of the browser; as root it is installed when it is missing. */
export async function ensureChromium(say: (words: string) => void): Promise<string> {
	const found = look();
	if (found) return found;
	if (!isRoot()) throw new StopSentence('Chromium is not installed, and the journeys in the browser need it. Install it (on Debian: sudo apt-get install chromium).');
	say('Installing Chromium with apt-get …');
	await installDebianPackage('chromium', 'Install Chromium by hand.');
	const now = look();
	if (!now) throw new StopSentence('Chromium was installed but is not on the PATH.');
	return now;
}

function look(): string | null {
	for (const folder of [...(process.env.PATH ?? '').split(delimiter), '/usr/bin'])
		for (const name of ['chromium', 'chromium-browser']) {
			const path = join(folder, name);
			if (folder && existsSync(path)) return path;
		}
	return null;
}

/** Flags for a machine without a display, a sandbox for root, or a way out. */
export const CHROMIUM_FLAGS = ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'];
