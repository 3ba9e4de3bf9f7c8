/** Builds the application when its sources are not those of the last build: by content, not by clock. */
import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { PROJECT_ROOT } from './data-folder';
import { run } from './run';
import { StopSentence } from './sentence';

/** What the build is made of. The commands and the tests are not in it. */
const SOURCES = ['src', 'static', 'svelte.config.js', 'vite.config.ts', 'tsconfig.json', 'package.json', 'package-lock.json'];
const APART = /^src\/cli$|\.spec\.ts$/;

/** SHA-256 over names and contents of everything that the build is made of. */
export function fingerprint(root = PROJECT_ROOT): string {
	const hash = createHash('sha256');
	const add = (path: string) => {
		const full = join(root, path);
		if (APART.test(path) || !existsSync(full)) return;
		if (statSync(full).isDirectory()) for (const name of readdirSync(full).sort()) add(`${path}/${name}`);
		else hash.update(`${path}\0`).update(createHash('sha256').update(readFileSync(full)).digest());
	};
	SOURCES.forEach(add);
	return hash.digest('hex');
}

/**
 * @returns whether it had to build
 * @throws StopSentence when the build fails
 */
export async function ensureBuilt(say: (words: string) => void): Promise<boolean> {
	const stamp = join(PROJECT_ROOT, 'build', '.nonius-sources');
	const now = fingerprint();
	if (existsSync(stamp) && readFileSync(stamp, 'utf8') === now) return false;
	say('Building the application …');
	const { status } = await run(process.execPath, ['node_modules/vite/bin/vite.js', 'build', '--logLevel', 'warn'], { stdout: 'stderr', env: { ...process.env, NODE_ENV: 'production' } });
	if (status !== 0) throw new StopSentence('The application could not be built; the reason is above.');
	writeFileSync(stamp, now);
	return true;
}
