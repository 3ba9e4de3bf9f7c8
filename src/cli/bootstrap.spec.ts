/** The entry of every command, as npm and scripts call it. */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { expect, test } from 'vitest';

const BOOTSTRAP = fileURLToPath(new URL('./bootstrap.mjs', import.meta.url));

function call(argv: string[], options: { cwd?: string; env?: Record<string, string> } = {}) {
	const { npm_lifecycle_event: _event, INIT_CWD: _from, ...env } = process.env;
	return spawnSync(process.execPath, [BOOTSTRAP, ...argv], { encoding: 'utf8', cwd: options.cwd, env: { ...env, ...options.env } });
}

function folderWithTable(): string {
	const folder = mkdtempSync(join(tmpdir(), 'nonius-call-'));
	writeFileSync(join(folder, 'watch.csv'), ['time,heart_rate', ...Array.from({ length: 60 }, (_, i) => `2026-11-20T07:15:${String(i).padStart(2, '0')}Z,${100 + i}`)].join('\n'));
	return folder;
}

test('scripts get JSON lines on stdout and nothing else; a refused file is a line too, and exit status 1', () => {
	const { stdout, status } = call(['nonius', 'inspect', 'watch.csv', 'missing.fit'], { cwd: folderWithTable() });
	const lines = stdout.trimEnd().split('\n').map((line) => JSON.parse(line) as { file: string; format?: string; error?: { code: string } });
	expect(lines.map((line) => line.file)).toEqual(['watch.csv', 'missing.fit']);
	expect(lines[0].format).toBe('csv');
	expect(lines[1].error?.code).toBe('cannot-open');
	expect(status).toBe(1);
});

test('through npm, which changes the folder, files are still named from where the user stands', () => {
	const { stdout, status } = call(['nonius', 'inspect', 'watch.csv'], { env: { npm_lifecycle_event: 'nonius', INIT_CWD: folderWithTable() } });
	expect(JSON.parse(stdout).format).toBe('csv');
	expect(status).toBe(0);
});

test.each([[['nonius']], [['nonius', 'guess']], [['deploy']], [['nonius', 'inspect']]])('a wrong call %j is answered on stderr with exit status 2', (argv) => {
	const { stdout, stderr, status } = call(argv);
	expect(stdout).toBe('');
	expect(stderr).not.toBe('');
	expect(status).toBe(2);
});
