/**
 * The engine in threads beside the server, so that a page answers while a long file is read. A thread has bounds in
 * memory and time: whatever a file does to its reader, the server stands.
 */
import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { Trace } from '../../formats/recording';
import type { ShiftEstimate } from '../../signal/shift';
import { EngineStopped, type Engine, type ReadEntry } from './engine';

export type ThreadRequest =
	| { id: number; task: 'read'; bytes: Uint8Array; fileName: string }
	| { id: number; task: 'shift'; reference: Trace; wearable: Trace };
export type ThreadAnswer = { id: number; ok: true; value: unknown } | { id: number; ok: false; message: string };
/** Said once by every thread, when it has loaded the engine. */
export const READY = 'ready';

const ENTRY = join('src', 'lib', 'server', 'jobs', 'thread-entry.mjs');

export interface ThreadedEngineOptions {
	threads?: number;
	/** A request that takes longer is stopped. */
	limitS?: number;
	/** Old-generation heap of one thread. */
	memoryMb?: number;
}

interface Waiting {
	request: ThreadRequest;
	resolve(value: unknown): void;
	reject(cause: Error): void;
}

interface EngineThread {
	worker: Worker;
	isReady: boolean;
	/** What it works on; null while it is idle. */
	current: (Waiting & { alarm: NodeJS.Timeout }) | null;
}

const LOADING_LIMIT_S = 30;

/** A pool of engine threads, started as needed, kept until `close`. */
export class ThreadedEngine implements Engine {
	private readonly idle: EngineThread[] = [];
	private readonly queue: Waiting[] = [];
	private readonly all = new Set<EngineThread>();
	private nextId = 1;
	private closed = false;
	private readonly entry = findEntry();
	private readonly threads: number;
	private readonly limitS: number;
	private readonly memoryMb: number;

	constructor(options: ThreadedEngineOptions = {}) {
		this.threads = options.threads ?? 2;
		this.limitS = options.limitS ?? 60;
		this.memoryMb = options.memoryMb ?? 384;
	}

	read(bytes: Uint8Array, fileName: string): Promise<ReadEntry[]> {
		return this.ask({ id: this.nextId++, task: 'read', bytes, fileName }) as Promise<ReadEntry[]>;
	}

	estimateShift(reference: Trace, wearable: Trace): Promise<ShiftEstimate> {
		return this.ask({ id: this.nextId++, task: 'shift', reference, wearable }) as Promise<ShiftEstimate>;
	}

	async close(): Promise<void> {
		this.closed = true;
		for (const waiting of this.queue.splice(0)) waiting.reject(new Error('The engine is closed.'));
		const threads = [...this.all];
		const ended = threads.map(({ worker }) => worker.terminate());
		for (const thread of threads) this.lose(thread, new Error('The engine is closed.'));
		await Promise.all(ended);
	}

	private ask(request: ThreadRequest): Promise<unknown> {
		if (this.closed) return Promise.reject(new Error('The engine is closed.'));
		return new Promise((resolve, reject) => {
			this.queue.push({ request, resolve, reject });
			this.next();
		});
	}

	private next(): void {
		if (this.queue.length === 0) return;
		const thread = this.idle.pop() ?? (this.all.size < this.threads ? this.start() : null);
		const waiting = thread === null ? undefined : this.queue.shift();
		if (thread !== null && waiting !== undefined) this.run(thread, waiting);
	}

	private start(): EngineThread {
		const worker = new Worker(pathToFileURL(this.entry), { resourceLimits: { maxOldGenerationSizeMb: this.memoryMb }, execArgv: [] });
		const thread: EngineThread = { worker, isReady: false, current: null };
		this.all.add(thread);
		worker.on('message', (answer: ThreadAnswer | typeof READY) => {
			if (answer === READY) this.begin(thread);
			else this.finish(thread, answer);
		});
		worker.on('error', (cause) => {
			const outOfMemory = 'code' in cause && cause.code === 'ERR_WORKER_OUT_OF_MEMORY';
			this.lose(thread, outOfMemory ? new EngineStopped('needed-too-much-memory', 'It unfolds to more than the reader may hold in memory, and the reading was stopped.') : cause);
		});
		worker.on('exit', () => this.lose(thread, new Error('The engine thread ended in the middle of its work.')));
		return thread;
	}

	private run(thread: EngineThread, waiting: Waiting): void {
		const tooLate = () => this.lose(thread, new Error(`The engine thread was not loaded after ${LOADING_LIMIT_S} s.`));
		thread.current = { ...waiting, alarm: setTimeout(tooLate, LOADING_LIMIT_S * 1000) };
		thread.worker.ref();
		if (thread.isReady) this.begin(thread);
	}

	/** Only now the time counts: loading the engine is our own, not the file's. */
	private begin(thread: EngineThread): void {
		thread.isReady = true;
		const { current } = thread;
		if (current === null) return;
		clearTimeout(current.alarm);
		const tooLong = () => this.lose(thread, new EngineStopped('took-too-long', `It was not read after ${this.limitS} s and the reading was stopped.`));
		current.alarm = setTimeout(tooLong, this.limitS * 1000);
		thread.worker.postMessage(current.request);
	}

	private finish(thread: EngineThread, answer: ThreadAnswer): void {
		const { current } = thread;
		if (current === null || current.request.id !== answer.id) return;
		clearTimeout(current.alarm);
		thread.current = null;
		thread.worker.unref();
		this.idle.push(thread);
		if (answer.ok) current.resolve(answer.value);
		else current.reject(new Error(answer.message));
		this.next();
	}

	/** The thread is gone or has to go; what it worked on fails with the cause. */
	private lose(thread: EngineThread, cause: Error): void {
		if (!this.all.delete(thread)) return;
		const at = this.idle.indexOf(thread);
		if (at >= 0) this.idle.splice(at, 1);
		void thread.worker.terminate();
		if (thread.current !== null) clearTimeout(thread.current.alarm);
		thread.current?.reject(cause);
		thread.current = null;
		this.next();
	}
}

/** The thread's entry stands in the sources, wherever this module itself was bundled to. */
function findEntry(): string {
	for (let folder = dirname(fileURLToPath(import.meta.url)); ; folder = dirname(folder)) {
		const entry = join(folder, ENTRY);
		if (existsSync(entry)) return entry;
		if (dirname(folder) === folder) {
			throw new Error(`The engine's sources (${ENTRY}) are not above ${import.meta.url}. Run the server from its checkout, or put the folder src beside the build.`);
		}
	}
}
