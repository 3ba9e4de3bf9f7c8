/** A server for tests of saving: keeps versions as the real one does, and fails when it is told to. */
import type { Content, EditToSend, EditStore, SendResult, Subject, TheirVersion } from '../saving';

type Failure = 'no connection' | 'signed out' | 'server fault' | 'answer lost';

export class PretendServer {
	readonly versions = new Map<Subject, { content: Content; author: string }[]>();
	/** What happens to the next sends; used up one by one, then all is well. */
	failures: Failure[] = [];
	/** Everything that arrived. */
	readonly received: EditToSend[] = [];
	refusal: string | null = null;

	readonly send = (edit: EditToSend): Promise<SendResult> => {
		const failure = this.failures.shift();
		if (failure && failure !== 'answer lost') return Promise.resolve({ ok: false, why: failure });
		const result = this.take(edit, 'RT');
		return failure === 'answer lost' ? Promise.reject(new TypeError('Failed to fetch')) : Promise.resolve(result);
	};

	take(edit: EditToSend, author: string): SendResult {
		this.received.push(edit);
		if (this.refusal !== null) return { ok: false, why: 'refused', sentence: this.refusal };
		const stored = this.versions.get(edit.subject) ?? [];
		const same = (v: { content: Content; author: string } | undefined) => v?.author === author && JSON.stringify(v.content) === JSON.stringify(edit.content);
		if (same(stored[edit.baseVersion])) return { ok: true, version: edit.baseVersion + 1, state: 'annotating' };
		if (stored.length !== edit.baseVersion) {
			const last = stored[stored.length - 1];
			const theirs: TheirVersion = { version: stored.length, content: last.content, authorInitials: last.author };
			return { ok: false, why: 'conflict', theirs };
		}
		this.versions.set(edit.subject, [...stored, { content: edit.content, author }]);
		return { ok: true, version: stored.length + 1, state: 'annotating' };
	}

	newest(subject: Subject): Content | undefined {
		return this.versions.get(subject)?.at(-1)?.content;
	}
}

/** Keeps one text, as a tab's entry in the browser's store does. */
export class PretendStore implements EditStore {
	text: string | null = null;
	works = true;
	read(): string[] {
		return this.text === null ? [] : [this.text];
	}
	write(text: string | null): boolean {
		if (this.works) this.text = text;
		return this.works;
	}
}

/** Calls that wait for their time; `run` lets the time come. */
export class PretendTimers {
	private waiting: (() => void)[] = [];
	readonly later = (call: () => void): (() => void) => {
		this.waiting.push(call);
		return () => {
			this.waiting = this.waiting.filter((w) => w !== call);
		};
	};
	run(): void {
		const due = this.waiting;
		this.waiting = [];
		for (const call of due) call();
	}
}

/** Lets everything that is due happen. */
export const settled = async (): Promise<void> => {
	for (let i = 0; i < 20; i++) await Promise.resolve();
};
