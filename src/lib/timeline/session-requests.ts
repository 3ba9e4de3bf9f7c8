/** What the page asks of the server for one session, and how answers become outcomes. */
import type { SessionDocument, SessionState } from './model';
import type { Content, EditToSend, SendResult, TheirVersion } from './saving';

export type Fetch = (input: string, init?: RequestInit) => Promise<Response>;

/** How the server answers what it does not do (RFC 9457). */
interface Problem {
	detail?: string;
	theirs?: TheirVersion;
}

async function problemOf(response: Response): Promise<Problem> {
	try {
		const body: unknown = await response.json();
		return typeof body === 'object' && body !== null ? (body as Problem) : {};
	} catch {
		return {};
	}
}

const base = (sessionId: string): string => `/api/v1/sessions/${sessionId}`;

function put(body: unknown): RequestInit {
	return { method: 'PUT', headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) };
}
function post(body: unknown): RequestInit {
	return { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) };
}

/** What of a content the server is told; what the search found is the server's own. */
function bodyOf(content: Content): Record<string, unknown> {
	if (content.of === 'alignment') {
		const { offsetS, driftPpm, locked, method } = content;
		return { offsetS, driftPpm, locked, method };
	}
	const { recordingId, kind, startS, endS, status, cleanedOverride, note } = content;
	return { recordingId, kind, startS, endS, status, cleanedOverride, note };
}

/** Sends one edit. */
export async function sendEdit(fetch: Fetch, sessionId: string, { subject, baseVersion, content }: EditToSend): Promise<SendResult> {
	const id = subject.slice(subject.indexOf(' ') + 1);
	const path = content.of === 'tag' ? `tags/${id}` : `alignments/${id}`;
	let response: Response;
	try {
		response = await fetch(`${base(sessionId)}/${path}`, put({ baseVersion, ...bodyOf(content) }));
	} catch {
		return { ok: false, why: 'no connection' };
	}
	if (response.ok) {
		const { version, state } = (await response.json()) as { version: number; state: SessionState };
		return { ok: true, version, state };
	}
	if (response.status === 401) return { ok: false, why: 'signed out' };
	if (response.status >= 500 || response.status === 408 || response.status === 429) return { ok: false, why: 'server fault' };
	const problem = await problemOf(response);
	if (response.status === 409 && problem.theirs) return { ok: false, why: 'conflict', theirs: problem.theirs };
	return { ok: false, why: 'refused', sentence: problem.detail ?? 'The server did not take this change.' };
}

export type Outcome = { ok: true; document: SessionDocument } | { ok: false; sentence: string };
export type SessionAct = 'submit' | 'decision' | 'take-back' | 'reopen';

/** Does an act on the whole session; the answer is the session as it stands then. */
export async function actOnSession(fetch: Fetch, sessionId: string, act: SessionAct, body: Record<string, unknown>): Promise<Outcome> {
	return documentFrom(() => fetch(`${base(sessionId)}/${act}`, post(body)));
}

/** The session as it stands now. */
export async function fetchDocument(fetch: Fetch, sessionId: string): Promise<Outcome> {
	return documentFrom(() => fetch(base(sessionId)));
}

async function documentFrom(ask: () => Promise<Response>): Promise<Outcome> {
	try {
		const response = await ask();
		if (response.ok) return { ok: true, document: (await response.json()) as SessionDocument };
		if (response.status === 401) return { ok: false, sentence: 'You are signed out. Sign in in another window, then try again; what you did here is kept.' };
		const problem = await problemOf(response);
		return { ok: false, sentence: problem.detail ?? 'The server did not answer as it should. What was saved is safe; try again.' };
	} catch {
		return { ok: false, sentence: 'No connection. What you did here is kept; try again when the connection is back.' };
	}
}
