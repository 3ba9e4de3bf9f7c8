import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { browserEditStore } from './edit-store';
import { SaveQueue, saveStatusInWords, type Content } from './saving';
import { PretendServer, PretendStore, PretendTimers, settled } from './testing/pretend-server';

const offset = (offsetS: number): Content => ({ of: 'alignment', offsetS, driftPpm: 0, locked: false, method: 'hand', estimate: null });

function queueOn(server = new PretendServer(), store = new PretendStore()) {
	const timers = new PretendTimers();
	const queue = new SaveQueue({ send: server.send, store, now: () => 1000, later: timers.later, onChange: () => {} });
	return { server, store, timers, queue };
}

const W = 'alignment w' as const;
const words = (queue: SaveQueue) => saveStatusInWords(queue.status, () => '14:07:52');

describe('saving', () => {
	it('sends at once, and forgets what was kept only when it is acknowledged', async () => {
		const { server, store, queue } = queueOn();
		queue.put(W, offset(1));
		expect(store.text).toContain('"offsetS":1');
		expect(words(queue)).toBe('saving');
		await settled();
		expect(server.newest(W)).toEqual(offset(1));
		expect(store.text).toBeNull();
		expect(words(queue)).toBe('saved 14:07:52');
	});

	it('counts up versions, and of several edits that wait sends only the last', async () => {
		const { server, queue } = queueOn();
		for (const s of [1, 2, 3, 4]) queue.put(W, offset(s));
		await settled();
		expect(server.versions.get(W)?.map((v) => v.content)).toEqual([offset(1), offset(4)]);
	});

	it('keeps edits while there is no connection, says how many, and sends them when it is back', async () => {
		const { server, store, timers, queue } = queueOn();
		server.failures = ['no connection', 'no connection'];
		queue.put(W, offset(1));
		await settled();
		queue.put('alignment v', offset(7));
		queue.put(W, offset(2));
		await settled();
		expect(words(queue)).toBe('2 changes waiting, no connection');
		expect(server.received).toHaveLength(0);
		expect(store.text).toContain('"offsetS":2');
		timers.run();
		await settled();
		expect(words(queue)).toBe('2 changes waiting, no connection');
		timers.run();
		await settled();
		expect([server.newest(W), server.newest('alignment v')]).toEqual([offset(2), offset(7)]);
		expect(queue.unsaved).toBe(0);
	});

	it('an edit whose answer was lost is not taken for a colleague’s when it is sent again', async () => {
		const { server, timers, queue } = queueOn();
		server.failures = ['answer lost'];
		queue.put(W, offset(1));
		await settled();
		queue.put(W, offset(2));
		timers.run();
		await settled();
		expect(queue.status.kind).toBe('saved');
		expect(server.versions.get(W)?.map((v) => v.content)).toEqual([offset(1), offset(2)]);
	});

	it('survives a reload at any moment: what was kept is found and sent', async () => {
		const server = new PretendServer();
		const store = new PretendStore();
		const first = queueOn(server, store);
		server.failures = ['answer lost'];
		first.queue.put(W, offset(1));
		await settled();
		first.queue.put(W, offset(2));
		const again = queueOn(server, store);
		expect(again.queue.recover()).toEqual(new Map([[W, offset(2)]]));
		again.queue.resume();
		await settled();
		expect(server.newest(W)).toEqual(offset(2));
		expect(store.text).toBeNull();
	});

	it('says that it is signed out, and that a store is full, since then a reload would lose what waits', async () => {
		const { server, store, queue } = queueOn();
		server.failures = ['signed out'];
		store.works = false;
		queue.put(W, offset(1));
		await settled();
		expect(words(queue)).toBe('1 change waiting, signed out');
		expect(queue.storeWorks).toBe(false);
	});
});

describe('a conflict', () => {
	async function conflicting() {
		const parts = queueOn();
		parts.server.take({ subject: W, baseVersion: 0, content: offset(10) }, 'SO');
		parts.queue.put(W, offset(1));
		await settled();
		return parts;
	}

	it('keeps both versions and stops only the edit that it is about', async () => {
		const { server, store, queue } = await conflicting();
		expect(queue.stopped).toEqual([{ subject: W, mine: offset(1), theirs: { version: 1, content: offset(10), authorInitials: 'SO' }, sentence: null }]);
		expect(words(queue)).toBe('one change meets a colleague’s');
		queue.put('alignment v', offset(7));
		await settled();
		expect(server.newest('alignment v')).toEqual(offset(7));
		expect(store.text).toContain('"offsetS":1');
	});

	it('“mine” goes on top of theirs, which stays among the versions', async () => {
		const { server, queue } = await conflicting();
		queue.put(W, offset(2));
		queue.settle(W, 'mine');
		await settled();
		expect(server.versions.get(W)?.map((v) => v.content)).toEqual([offset(10), offset(2)]);
		expect(queue.unsaved).toBe(0);
	});

	it('“theirs” lets mine go and later edits stand on theirs', async () => {
		const { server, queue } = await conflicting();
		queue.settle(W, 'theirs');
		queue.put(W, offset(3));
		await settled();
		expect(server.versions.get(W)?.map((v) => v.content)).toEqual([offset(10), offset(3)]);
	});

	it('is found again after a reload', async () => {
		const { server, store } = await conflicting();
		const again = queueOn(server, store);
		again.queue.recover();
		again.queue.resume();
		await settled();
		expect(again.queue.stopped[0].theirs?.content).toEqual(offset(10));
	});

	it('what the server will never take is kept with its sentence until somebody lets it go', async () => {
		const { server, store, queue } = queueOn();
		server.refusal = 'S01 is in review.';
		queue.put(W, offset(1));
		await settled();
		expect(queue.stopped[0].sentence).toBe('S01 is in review.');
		expect(store.text).toContain('"offsetS":1');
		queue.settle(W, 'theirs');
		expect(store.text).toBeNull();
	});
});

describe('whatever happens to the connection and the page', () => {
	it('the last thing typed arrives, once the connection is back', async () => {
		const act = fc.oneof(
			fc.record({ what: fc.constant('edit' as const), subject: fc.constantFrom('alignment a' as const, 'alignment b' as const), offsetS: fc.integer({ min: 0, max: 9 }) }),
			fc.record({ what: fc.constant('fail' as const), how: fc.constantFrom('no connection' as const, 'answer lost' as const, 'server fault' as const) }),
			fc.constant({ what: 'wait' as const }),
			fc.constant({ what: 'time' as const }),
			fc.constant({ what: 'reload' as const })
		);
		await fc.assert(
			fc.asyncProperty(fc.array(act, { maxLength: 30 }), async (acts) => {
				const server = new PretendServer();
				const store = new PretendStore();
				let parts = queueOn(server, store);
				const last = new Map<string, Content>();
				for (const a of acts) {
					if (a.what === 'edit') {
						last.set(a.subject, offset(a.offsetS));
						parts.queue.put(a.subject, offset(a.offsetS));
					} else if (a.what === 'fail') server.failures.push(a.how);
					else if (a.what === 'wait') await settled();
					else if (a.what === 'time') parts.timers.run();
					else {
						await settled();
						parts = queueOn(server, store);
						for (const [subject, versions] of server.versions) parts.queue.setVersion(subject, versions.length);
						parts.queue.recover();
						parts.queue.resume();
					}
				}
				for (let i = 0; i < 40 && parts.queue.unsaved > 0; i++) {
					await settled();
					parts.timers.run();
				}
				await settled();
				expect(parts.queue.stopped).toEqual([]);
				for (const [subject, content] of last) expect(server.newest(subject === 'alignment a' ? subject : 'alignment b')).toEqual(content);
				expect(store.text).toBeNull();
			}),
			{ numRuns: 200 }
		);
	});
});

describe('the browser’s store', () => {
	class MemoryStorage implements Storage {
		private readonly items = new Map<string, string>();
		get length() {
			return this.items.size;
		}
		key = (i: number) => [...this.items.keys()][i] ?? null;
		getItem = (key: string) => this.items.get(key) ?? null;
		setItem = (key: string, value: string) => void this.items.set(key, value);
		removeItem = (key: string) => void this.items.delete(key);
		clear = () => this.items.clear();
	}

	it('a tab takes up what another tab of the same person and session left, and nobody else’s', () => {
		const storage = new MemoryStorage();
		browserEditStore('s1', 'RT', 'tab-1', storage).write(JSON.stringify([[W, { baseVersion: 0, sent: null, next: offset(1) }]]));
		browserEditStore('s1', 'KM', 'tab-2', storage).write('[["alignment x",{"baseVersion":0}]]');
		browserEditStore('s2', 'RT', 'tab-3', storage).write('[["alignment y",{"baseVersion":0}]]');
		const store = browserEditStore('s1', 'RT', 'tab-4', storage);
		expect(store.read()).toHaveLength(1);
		expect(storage.length).toBe(3);
		expect(browserEditStore('s1', 'RT', 'tab-5', storage).read().join()).toContain('"offsetS":1');
	});

	it('a store that is full keeps the other tab’s entry where it was', () => {
		const storage = new MemoryStorage();
		browserEditStore('s1', 'RT', 'tab-1', storage).write('[["alignment w",{"baseVersion":0}]]');
		storage.setItem = () => {
			throw new DOMException('full', 'QuotaExceededError');
		};
		const store = browserEditStore('s1', 'RT', 'tab-2', storage);
		expect(store.read()).toHaveLength(1);
		expect(storage.length).toBe(1);
		expect(store.write('[]')).toBe(false);
	});
});
