/** Debian's Chromium for the journeys in the browser. */
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { StopSentence } from './sentence';

/** Path of the browser; as root it is installed when it is missing. */
export function ensureChromium(say: (words: string) => void): string {
	const found = look();
	if (found) return found;
	if (process.getuid?.() !== 0) throw new StopSentence('Chromium is not installed, and the journeys in the browser need it. Install it (on Debian: sudo apt-get install chromium).');
	say('Installing Chromium with apt-get …');
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	for (const argv of [['update', '-q'], ['install', '-y', '-q', '--no-install-recommends', 'chromium']])
		if (spawnSync('apt-get', argv, { stdio: ['ignore', 2, 2], env }).status !== 0) throw new StopSentence(`apt-get ${argv[0]} did not succeed; its own words are above. Install Chromium by hand.`);
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
