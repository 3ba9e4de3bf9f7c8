/** Builds the application when its sources are newer than the last build: by content, not by clock. */
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { PROJECT_ROOT } from './data-folder';
import { StopSentence } from './sentence';

const SOURCES = ['src', 'static', 'svelte.config.js', 'vite.config.ts', 'tsconfig.json', 'package-lock.json'];
const STAMP = join(PROJECT_ROOT, 'build', '.nonius-sources');

function fingerprint(): string {
	const hash = createHash('sha256');
	const add = (path: string) => {
		const full = join(PROJECT_ROOT, path);
		if (!existsSync(full)) return;
		const entries = path.includes('.') && !path.startsWith('src/') ? null : readdirOrNull(full);
		if (entries === null) hash.update(path).update(readFileSync(full));
		else for (const name of entries.sort()) add(`${path}/${name}`);
	};
	SOURCES.forEach(add);
	return hash.digest('hex');
}

function readdirOrNull(path: string): string[] | null {
	try {
		return readdirSync(path);
	} catch {
		return null;
	}
}

/** @returns whether it had to build */
export function ensureBuilt(say: (words: string) => void): boolean {
	const now = fingerprint();
	if (existsSync(STAMP) && readFileSync(STAMP, 'utf8') === now) return false;
	say('Building the application …');
	const { status } = spawnSync(process.execPath, ['node_modules/vite/bin/vite.js', 'build', '--logLevel', 'warn'], {
		cwd: PROJECT_ROOT,
		stdio: ['ignore', 2, 2],
		env: { ...process.env, NODE_ENV: 'production' }
	});
	if (status !== 0) throw new StopSentence('The application could not be built; the reason is above.');
	writeFileSync(STAMP, now);
	return true;
}
