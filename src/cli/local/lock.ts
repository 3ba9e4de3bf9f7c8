/** One start at a time on a data folder. */
import { linkSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { isAlive, startTicks } from './process-table';
import { StopSentence } from './sentence';

export interface LockWords {
	/** Said when the folder is held, before waiting for it. */
	waiting: string;
	/** The sentence when it stays held. */
	held(pid: number): string;
}

/**
 * Takes the lock, after a short wait where its holder may be on its way out. A lock whose process is gone is taken over.
 * @returns gives it back
 * @throws StopSentence when another process keeps it
 */
export async function takeLock(file: string, words: LockWords, say: (words: string) => void = () => {}, waitMs = 6000): Promise<() => void> {
	const end = Date.now() + waitMs;
	let told = false;
	for (;;) {
		const holder = tryToTake(file);
		if (holder === null) return () => giveBack(file);
		if (Date.now() > end) throw new StopSentence(words.held(holder));
		if (!told) say(words.waiting);
		told = true;
		await new Promise((r) => setTimeout(r, 200));
	}
}

const mine = () => `${process.pid} ${startTicks(process.pid) ?? ''}`;

/** null when it is ours now, else the process that holds it. */
function tryToTake(file: string): number | null {
	const draft = `${file}.${process.pid}`;
	writeFileSync(draft, mine());
	try {
		for (;;) {
			// A link comes into being whole: nobody ever reads half a lock.
			if (linked(draft, file)) return null;
			const held = contentOf(file);
			if (held === null) continue;
			const pid = livingHolder(held);
			if (pid !== null) return pid;
			setAside(file, held);
		}
	} finally {
		rmSync(draft, { force: true });
	}
}

/** Of several that find the same stale lock, one moves it away; who moved a fresh one by mistake puts it back. */
function setAside(file: string, stale: string): void {
	const aside = `${file}.${process.pid}.stale`;
	try {
		renameSync(file, aside);
	} catch {
		return;
	}
	if (contentOf(aside) !== stale) linked(aside, file);
	rmSync(aside, { force: true });
}

function giveBack(file: string): void {
	if (contentOf(file) === mine()) rmSync(file, { force: true });
}

/** After a crash the number may belong to another program: the time it began tells them apart. */
function livingHolder(held: string): number | null {
	const [pid, ticks] = held.split(' ');
	const number = Number(pid);
	if (!Number.isInteger(number) || number <= 0 || !isAlive(number)) return null;
	return (startTicks(number) ?? '') === (ticks ?? '') ? number : null;
}

function linked(from: string, to: string): boolean {
	try {
		linkSync(from, to);
		return true;
	} catch (cause) {
		if ((cause as NodeJS.ErrnoException).code === 'EEXIST') return false;
		throw cause;
	}
}

function contentOf(file: string): string | null {
	try {
		return readFileSync(file, 'utf8');
	} catch {
		return null;
	}
}
