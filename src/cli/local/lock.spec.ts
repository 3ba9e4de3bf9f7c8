import { spawn } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { takeLock } from './lock';
import { startTicks } from './process-table';

const words = { waiting: 'waiting', held: (pid: number) => `held by ${pid}` };
const lockFile = () => join(mkdtempSync(join(tmpdir(), 'nonius-lock-')), 'start.pid');

test('a second start on the same folder is refused and names the first', async () => {
	const file = lockFile();
	const giveBack = await takeLock(file, words);
	const told: string[] = [];
	await expect(takeLock(file, words, (w) => told.push(w), 0)).rejects.toThrow(`held by ${process.pid}`);
	giveBack();
	(await takeLock(file, words, () => {}, 0))();
	expect(readdirSync(join(file, '..'))).toEqual([]);
});

test('the lock of a process that was killed is taken over', async () => {
	const file = lockFile();
	const child = spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000)']);
	const { pid } = child;
	if (pid === undefined) throw new Error('The process did not start.');
	writeFileSync(file, `${pid} ${startTicks(pid)}`);
	await expect(takeLock(file, words, () => {}, 0)).rejects.toThrow(`held by ${pid}`);
	child.kill('SIGKILL');
	await new Promise((ended) => child.once('exit', ended));
	const giveBack = await takeLock(file, words, () => {}, 0);
	expect(readFileSync(file, 'utf8')).toContain(String(process.pid));
	giveBack();
});

test('a number that another program has by now does not keep the folder closed for good', async () => {
	const file = lockFile();
	writeFileSync(file, `${process.ppid} 1`);
	(await takeLock(file, words, () => {}, 0))();
});

test('a broken lock file does not keep the folder closed', async () => {
	const file = lockFile();
	writeFileSync(file, '');
	(await takeLock(file, words, () => {}, 0))();
});

test('the waiting start goes on when the first gives the folder back', async () => {
	const file = lockFile();
	const giveBack = await takeLock(file, words);
	const told: string[] = [];
	const second = takeLock(
		file,
		words,
		(w) => {
			told.push(w);
			giveBack();
		},
		5000
	);
	(await second)();
	expect(told).toEqual(['waiting']);
});
