import { afterEach, describe, expect, it } from 'vitest';
import { EngineStopped } from './engine';
import { ThreadedEngine } from './threaded-engine';

const table = (n: number) => {
	const rows = Array.from({ length: n }, (_, i) => `${1_728_891_060 + i},${120 + (i % 40)}`);
	return new TextEncoder().encode(['time,heart_rate', ...rows].join('\n'));
};

describe('reading beside the server', () => {
	let engine: ThreadedEngine;
	afterEach(() => engine.close());

	it('reads file after file in the same thread, in the order of asking', async () => {
		engine = new ThreadedEngine({ threads: 1 });
		const counts = await Promise.all([600, 700, 800].map((n) => engine.read(table(n), 'a.csv')));
		expect(counts.map(([e]) => (e.reading.ok ? e.reading.recording.traces[0].tS.length : 0))).toEqual([600, 700, 800]);
	});
	it('stops a reading that takes too long, and reads the next file all the same', async () => {
		engine = new ThreadedEngine({ threads: 1, limitS: 0.001 });
		await expect(engine.read(table(60_000), 'long.csv')).rejects.toThrow(EngineStopped);
		await engine.close();
		engine = new ThreadedEngine({ threads: 1 });
		expect((await engine.read(table(60), 'a.csv'))[0].reading.ok).toBe(true);
	});
	it('stops a reading that needs too much memory instead of taking the server down', async () => {
		engine = new ThreadedEngine({ threads: 1, memoryMb: 24 });
		await expect(engine.read(table(900_000), 'large.csv')).rejects.toMatchObject({ code: 'needed-too-much-memory' });
	});
	it('lets nobody wait for an answer that will not come when it is closed', async () => {
		engine = new ThreadedEngine({ threads: 1 });
		const waiting = engine.read(table(60), 'a.csv');
		const closed = expect(waiting).rejects.toThrow('closed');
		await engine.close();
		await closed;
	});
});
