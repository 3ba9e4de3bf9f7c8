import { tooLargeSentence } from './file-size';

/** Sends chosen files to the server, three at a time, each by itself, and says how far each one is. */
export interface SentFile {
	key: number;
	name: string;
	sizeBytes: number;
	/** Share of the bytes that have left, 0 to 1. */
	share: number;
	state: 'queued' | 'sending' | 'failed';
	/** For `failed`: what happened and what to do. */
	message: string | null;
}

const AT_ONCE = 3;

export class FileSender {
	/** Files that are not with the server yet; one that has arrived leaves the list. */
	files = $state<SentFile[]>([]);
	readonly waiting = $derived(this.files.filter((f) => f.state !== 'failed').length);
	private readonly contents: Record<number, File | undefined> = {};
	private nextKey = 1;

	constructor(
		private readonly address: string,
		private readonly largestBytes: number,
		/** Called when a file has arrived. */
		private readonly arrived: () => void
	) {}

	add(chosen: Iterable<File>): void {
		for (const file of chosen) {
			const key = this.nextKey++;
			const tooLarge = file.size > this.largestBytes;
			this.files.push({
				key,
				name: file.name,
				sizeBytes: file.size,
				share: 0,
				state: tooLarge ? 'failed' : 'queued',
				message: tooLarge ? tooLargeSentence(file.size, this.largestBytes) : null
			});
			if (!tooLarge) this.contents[key] = file;
		}
		this.next();
	}

	canRetry(key: number): boolean {
		return this.contents[key] !== undefined;
	}

	retry(key: number): void {
		const entry = this.files.find((f) => f.key === key);
		if (!entry || !this.canRetry(key)) return;
		Object.assign(entry, { state: 'queued', share: 0, message: null });
		this.next();
	}

	dismiss(key: number): void {
		this.contents[key] = undefined;
		this.files = this.files.filter((f) => f.key !== key);
	}

	private next(): void {
		while (this.files.filter((f) => f.state === 'sending').length < AT_ONCE) {
			const entry = this.files.find((f) => f.state === 'queued');
			if (!entry) return;
			this.send(entry);
		}
	}

	// The one browser interface that tells how much of a request has left.
	private send(entry: SentFile): void {
		const content = this.contents[entry.key];
		if (!content) return;
		entry.state = 'sending';
		const form = new FormData();
		form.append('file', content, entry.name);
		const request = new XMLHttpRequest();
		request.upload.onprogress = (event) => {
			if (event.lengthComputable) entry.share = event.loaded / event.total;
		};
		const fail = (message: string) => {
			entry.state = 'failed';
			entry.message = message;
			this.next();
		};
		request.onload = () => {
			if (request.status >= 200 && request.status < 300) {
				this.dismiss(entry.key);
				this.arrived();
				this.next();
			} else fail(problemSentence(request.responseText, request.status));
		};
		request.onerror = () => fail('It did not reach the server. Nothing was stored; check the connection and send it again.');
		request.open('POST', this.address);
		request.setRequestHeader('accept', 'application/json');
		request.send(form);
	}
}

/** The sentence of a problem+json answer, or one of our own. */
export function problemSentence(body: string, status: number): string {
	try {
		const problem: unknown = JSON.parse(body);
		if (typeof problem === 'object' && problem !== null && 'detail' in problem && typeof problem.detail === 'string') return problem.detail;
	} catch {
		// Not a problem document: a proxy's page, or nothing.
	}
	if (status === 413) return 'The server takes no request of this size. Nothing was stored; export the session alone, or cut the recording in two.';
	return `The server answered ${status} and no reason. Nothing was stored; try again in a moment.`;
}
