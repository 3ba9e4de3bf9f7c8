/** State of the import page: the board as the server has it, the lines of its recordings, and what a person decides. */
import { createQuery } from '@tanstack/svelte-query';
import type { BoardFile, BoardSession, ImportBoard } from './board';
import { FileSender, problemSentence } from './file-sender.svelte';
import type { Outline } from './outline';
import { offsetsSearched } from './questions';

/** While something is under way; else colleagues' uploads are looked for now and then. */
const BUSY_MS = 700;
const QUIET_MS = 15_000;
/** A board that has not changed for so long is looked at less often, whatever it says is under way. */
const PATIENCE_MS = 30_000;
const PATIENT_MS = 5_000;

export class ImportPage {
	readonly sender: FileSender;
	outlines = $state.raw<Record<string, Outline>>({});
	/** What went wrong with the last decision, until the next one. */
	fault = $state<string | null>(null);
	/** An answer is on its way to the server. */
	deciding = $state(false);

	private readonly query;
	private readonly base: string;
	private lastBoard = '';
	private lastChange = Date.now();
	/** Recordings whose line was asked for. */
	private readonly asked: Record<string, boolean> = {};

	/** Made while the page's component is made. */
	constructor(slug: string, initial: ImportBoard, largestBytes: number) {
		this.base = `/api/v1/studies/${slug}/uploads`;
		this.query = createQuery(() => ({
			queryKey: ['import', slug],
			queryFn: () => this.fetchBoard(),
			initialData: initial,
			refetchInterval: (query: { state: { data?: ImportBoard } }) => this.interval(query.state.data ?? initial)
		}));
		this.sender = new FileSender(this.base, largestBytes, () => void this.refresh());
		void this.fetchOutlines(initial);
	}

	get board(): ImportBoard {
		return this.query.data;
	}

	/** The server does not answer; what is shown is what it said last. */
	get isStale(): boolean {
		return this.query.isError;
	}

	async refresh(): Promise<void> {
		await this.query.refetch();
	}

	deviceOf(file: BoardFile) {
		return this.board.devices.find((d) => d.modelId === file.recording?.deviceModelId) ?? null;
	}

	/** The session whose times a loose file overlaps most, to show it there. */
	nearSession(file: BoardFile): BoardSession | null {
		const { recording, question } = file;
		if (recording === null) return null;
		const named = question && 'sessionId' in question ? this.board.sessions.find((s) => s.sessionId === question.sessionId) : undefined;
		if (named) return named;
		const overlapS = (s: BoardSession) => Math.min(s.endS, recording.endS) - Math.max(s.startS, recording.startS);
		const [best] = [...this.board.sessions].sort((a, b) => overlapS(b) - overlapS(a));
		return best && overlapS(best) > 0 ? best : null;
	}

	answerDevice = (uploadId: string, deviceModelId: string) => this.decide('PATCH', `/api/v1/uploads/${uploadId}`, { act: 'device', deviceModelId });
	placeIn = (uploadId: string, sessionId: string) => this.decide('PATCH', `/api/v1/uploads/${uploadId}`, { act: 'session', sessionId });
	placeInNew = (uploadId: string) => this.decide('PATCH', `/api/v1/uploads/${uploadId}`, { act: 'new-session' });
	keepApart = (uploadId: string) => this.decide('PATCH', `/api/v1/uploads/${uploadId}`, { act: 'keep-apart' });
	takeOut = (uploadId: string) => this.decide('DELETE', `/api/v1/uploads/${uploadId}`);
	describe = (sessionId: string, said: { participantId?: string | null; participantCode?: string; activity?: string | null }) =>
		this.decide('PATCH', `${this.base}/sessions/${sessionId}`, said);

	/** Adds a device to the study and says that it made the file. */
	async addDevice(uploadId: string, device: { name: string; role: string; placement: string }): Promise<boolean> {
		const answer = await this.send('POST', `${this.base}/devices`, device);
		const added: unknown = answer?.ok ? await answer.json() : null;
		if (typeof added !== 'object' || added === null || !('deviceModelId' in added) || typeof added.deviceModelId !== 'string') return false;
		return this.answerDevice(uploadId, added.deviceModelId);
	}

	private async decide(method: string, address: string, body?: unknown): Promise<boolean> {
		const answer = await this.send(method, address, body);
		await this.refresh();
		return answer?.ok ?? false;
	}

	private async send(method: string, address: string, body?: unknown): Promise<Response | null> {
		this.deciding = true;
		this.fault = null;
		try {
			const answer = await fetch(address, { method, headers: { 'content-type': 'application/json', accept: 'application/json' }, body: body === undefined ? undefined : JSON.stringify(body) });
			if (!answer.ok) this.fault = problemSentence(await answer.text(), answer.status);
			return answer;
		} catch {
			this.fault = 'The server was not reached. Nothing was changed; check the connection and try again.';
			return null;
		} finally {
			this.deciding = false;
		}
	}

	private async fetchBoard(): Promise<ImportBoard> {
		const answer = await fetch(this.base, { headers: { accept: 'application/json' } });
		const text = await answer.text();
		if (!answer.ok) throw new Error(problemSentence(text, answer.status));
		if (text !== this.lastBoard) {
			this.lastBoard = text;
			this.lastChange = Date.now();
		}
		// Our own server's answer, in the shape that the same type gives it.
		const board = JSON.parse(text) as ImportBoard;
		void this.fetchOutlines(board);
		return board;
	}

	private interval(board: ImportBoard): number {
		if (board.underWay === 0 && !offsetsSearched(board)) return QUIET_MS;
		return Date.now() - this.lastChange > PATIENCE_MS ? PATIENT_MS : BUSY_MS;
	}

	private async fetchOutlines(board: ImportBoard): Promise<void> {
		if (typeof window === 'undefined') return;
		const files = [...board.sessions.flatMap((s) => s.files), ...board.loose];
		const missing = files.flatMap((f) => (f.recording && !this.asked[f.recording.recordingId] ? [f.recording.recordingId] : []));
		for (let i = 0; i < missing.length; i += 40) {
			const ids = missing.slice(i, i + 40);
			for (const id of ids) this.asked[id] = true;
			const answer = await fetch(`${this.base}/outlines?recordings=${ids.join(',')}`).catch(() => null);
			if (answer?.ok) this.outlines = { ...this.outlines, ...((await answer.json()) as Record<string, Outline>) };
			else for (const id of ids) this.asked[id] = false;
		}
	}
}
