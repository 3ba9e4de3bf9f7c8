import { expect, test } from 'vitest';
import { RunningParts } from './running-parts';

test('everything is stopped once, last first', async () => {
	const parts = new RunningParts();
	const stopped: string[] = [];
	await parts.start(async () => 'database', (name) => stopped.push(name));
	await parts.start(async () => 'server', (name) => stopped.push(name));
	await Promise.all([parts.stopAll(), parts.stopAll()]);
	expect(stopped).toEqual(['server', 'database']);
});

test('a part that is just starting when the stop comes is stopped too, not left behind', async () => {
	const parts = new RunningParts();
	const stopped: string[] = [];
	let started = (_name: string) => {};
	const starting = parts.start(() => new Promise<string>((done) => (started = done)), (name) => stopped.push(name));
	const ending = parts.stopAll();
	started('database');
	await Promise.all([starting, ending]);
	expect(stopped).toEqual(['database']);
});

test('a part that failed to start does not keep the others running', async () => {
	const parts = new RunningParts();
	const stopped: string[] = [];
	await parts.start(async () => 'database', (name) => stopped.push(name));
	await expect(parts.start(() => Promise.reject(new Error('no port')), () => stopped.push('never'))).rejects.toThrow('no port');
	await parts.stopAll();
	expect(stopped).toEqual(['database']);
});

test('nothing is started after the stop has begun', async () => {
	const parts = new RunningParts();
	await parts.stopAll();
	let begun = false;
	await expect(parts.start(async () => (begun = true), () => {})).rejects.toThrow('being stopped');
	expect(begun).toBe(false);
});
