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

/** A pool of engine threads, started as needed, kept until `close`. */
export class ThreadedEngine implements Engine {
	private readonly idle: Worker[] = [];
	private readonly queue: Waiting[] = [];
	private readonly all = new Set<Worker>();
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
		await Promise.all([...this.all].map((thread) => thread.terminate()));
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

	private start(): Worker {
		const thread = new Worker(pathToFileURL(this.entry), { resourceLimits: { maxOldGenerationSizeMb: this.memoryMb }, execArgv: [] });
		this.all.add(thread);
		thread.unref();
		return thread;
	}

	private run(thread: Worker, { request, resolve, reject }: Waiting): void {
		const finish = (settle: () => void, reusable: boolean) => {
			clearTimeout(alarm);
			thread.removeAllListeners();
			if (reusable && !this.closed) {
				thread.on('error', () => this.discard(thread));
				thread.unref();
				this.idle.push(thread);
			} else this.discard(thread);
			settle();
			this.next();
		};
		const alarm = setTimeout(
			() => finish(() => reject(new EngineStopped('took-too-long', `It was not read after ${this.limitS} s and the reading was stopped.`)), false),
			this.limitS * 1000
		);
		thread.ref();
		thread.on('message', (answer: ThreadAnswer) => finish(() => (answer.ok ? resolve(answer.value) : reject(new Error(answer.message))), true));
		thread.on('error', (cause) => {
			const outOfMemory = 'code' in cause && cause.code === 'ERR_WORKER_OUT_OF_MEMORY';
			finish(() => reject(outOfMemory ? new EngineStopped('needed-too-much-memory', 'It unfolds to more than the reader may hold in memory, and the reading was stopped.') : cause), false);
		});
		thread.on('exit', () => finish(() => reject(new Error('The engine thread ended in the middle of its work.')), false));
		thread.postMessage(request);
	}

	private discard(thread: Worker): void {
		this.all.delete(thread);
		const at = this.idle.indexOf(thread);
		if (at >= 0) this.idle.splice(at, 1);
		void thread.terminate();
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
