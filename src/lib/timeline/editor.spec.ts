import { describe, expect, it } from 'vitest';
import { moveCursorTo, setOffset } from './commands';
import { TimelineEditor } from './editor.svelte';
import type { SessionDocument } from './model';
import { PretendStore, PretendTimers, settled } from './testing/pretend-server';
import { session, sessionDocument, sessionTraces, START_S, tag } from './testing/session-in-hand';

interface Asked {
	url: string;
	method: string;
	body: Record<string, unknown>;
}

/** An editor whose requests are answered by `answer`; by default every edit is taken. */
function editorOn(document: SessionDocument, answer: (asked: Asked) => Response = ({ body }) => Response.json({ version: Number(body.baseVersion) + 1, state: 'annotating' }), store = new PretendStore()) {
	const asked: Asked[] = [];
	const timers = new PretendTimers();
	const editor = new TimelineEditor(document, sessionTraces(), {
		fetch: (url, init) => {
			const request: Asked = { url, method: init?.method ?? 'GET', body: typeof init?.body === 'string' ? (JSON.parse(init.body) as Record<string, unknown>) : {} };
			asked.push(request);
			return Promise.resolve(answer(request));
		},
		store,
		now: () => Date.UTC(2026, 9, 14, 14, 7, 52),
		later: timers.later
	});
	return { editor, asked, timers, store };
}

const problem = (status: number, detail: string, more: object = {}) => Response.json({ detail, ...more }, { status });

describe('the editor on the page', () => {
	it('saves what a command changes, and nothing when only the view changed', async () => {
		const { editor, asked } = editorOn(sessionDocument());
		editor.run('zoomIn');
		editor.run('holdNext');
		await settled();
		expect(asked).toEqual([]);
		editor.run('nudgeForward');
		await settled();
		expect(asked).toEqual([{ url: `/api/v1/sessions/${sessionDocument().sessionId}/alignments/ostrel`, method: 'PUT', body: { baseVersion: 1, offsetS: 0.1, driftPpm: 0, locked: false, method: 'hand' } }]);
		expect(editor.saveStatus).toMatch(/^saved \d\d:07:52$/);
		expect(editor.state.alignments.ostrel.version).toBe(2);
		expect(editor.undoLabel).toBe('offset 2 Ostrel +0.1 s');
	});

	it('shows how far the session has come by an edit, without loading it again', async () => {
		const { editor } = editorOn(sessionDocument({ state: 'aligned' }));
		editor.run('nudgeForward');
		await settled();
		expect(editor.state.document.state).toBe('annotating');
	});

	it('sends nothing while a trace is dragged and one edit when it is let go', async () => {
		const { editor, asked } = editorOn(sessionDocument());
		editor.begin();
		for (const s of [3.1, 3.5, 4]) editor.move(setOffset('wrenna', s));
		await settled();
		expect(asked).toHaveLength(0);
		expect(editor.state.alignments.wrenna.offsetS).toBe(4);
		editor.end(true);
		await settled();
		expect(asked).toHaveLength(1);
		expect(editor.undoLabel).toBe('offset 1 Wrenna +1 s');
		editor.begin();
		editor.move(setOffset('wrenna', 40));
		editor.end(false);
		await settled();
		expect(asked).toHaveLength(1);
		expect(editor.state.alignments.wrenna.offsetS).toBe(4);
	});

	it('a drag back to where it began ends where it began', () => {
		const { editor } = editorOn(sessionDocument());
		editor.begin();
		editor.move(setOffset('wrenna', 9));
		editor.move(setOffset('wrenna', 3));
		expect(editor.state.alignments.wrenna.offsetS).toBe(3);
		editor.end(true);
		expect(editor.undoLabel).toBeNull();
	});

	it('an undone new tag is saved as removed, so that it does not come back with the next load', async () => {
		const { editor, asked } = editorOn(sessionDocument());
		editor.run(moveCursorTo(START_S + 100));
		editor.run('setEdge');
		editor.run(moveCursorTo(START_S + 140));
		editor.run('kind:rest');
		await settled();
		editor.run('undo');
		await settled();
		expect(asked.map((a) => [a.body.status, a.body.baseVersion])).toEqual([['accepted', 0], ['removed', 1]]);
		editor.run('redo');
		await settled();
		expect(asked[2].body).toMatchObject({ status: 'accepted', baseVersion: 2 });
	});

	it('what was not acknowledged before a reload is on the page again and is sent', async () => {
		const store = new PretendStore();
		const first = editorOn(sessionDocument(), () => problem(503, ''), store);
		first.editor.run('nudgeForward');
		await settled();
		expect(first.editor.saveStatus).toBe('1 change waiting, the server does not answer as it should');
		const again = editorOn(sessionDocument(), undefined, store);
		expect(again.editor.state.alignments.wrenna.offsetS).toBe(3.1);
		expect(again.editor.unsaved).toBe(1);
	});

	it('a conflict shows both; theirs can be taken without losing sight of anything else', async () => {
		const theirs = { version: 2, authorInitials: 'SO', content: { of: 'alignment', offsetS: 8, driftPpm: 0, locked: false, method: 'hand', estimate: null } };
		const { editor } = editorOn(sessionDocument(), () => problem(409, 'The offset was changed meanwhile.', { theirs }));
		editor.run('nudgeForward');
		await settled();
		expect(editor.state.alignments.wrenna.offsetS).toBe(3.1);
		expect(editor.stopped[0].theirs?.content).toMatchObject({ offsetS: 8 });
		await editor.settle('alignment wrenna', 'theirs');
		expect(editor.state.alignments.wrenna.offsetS).toBe(8);
		expect(editor.saveState.kind).toBe('saved');
	});

	it('an edit that the server will not take is said, kept, and gives way to what is stored when it is let go', async () => {
		const { editor } = editorOn(sessionDocument(), (a) => (a.method === 'GET' ? Response.json(sessionDocument({ state: 'in review' })) : problem(403, 'S01 is in review. Nothing moves.')));
		editor.run('nudgeForward');
		await settled();
		expect(editor.stopped[0].sentence).toBe('S01 is in review. Nothing moves.');
		await editor.settle('alignment wrenna', 'theirs');
		expect(editor.state.alignments.wrenna.offsetS).toBe(3);
		expect(editor.state.document.state).toBe('in review');
	});

	it('hands in only when everything is saved, and takes the session as the server then gives it', async () => {
		const handed = sessionDocument({ state: 'in review', can: { align: false, annotate: false, submit: false, review: false, takeBack: true, reopen: false } });
		let reachable = false;
		const { editor, asked, timers } = editorOn(sessionDocument(), ({ url, body }) => {
			if (!reachable) throw new TypeError('Failed to fetch');
			return url.endsWith('/submit') ? Response.json(handed) : Response.json({ version: Number(body.baseVersion) + 1, state: 'annotating' });
		});
		editor.run('nudgeForward');
		await settled();
		expect((await editor.handIn('ready')).ok).toBe(false);
		expect(editor.state.said?.text).toContain('no connection');
		reachable = true;
		timers.run();
		await settled();
		expect((await editor.handIn('ready')).ok).toBe(true);
		expect(asked.at(-1)).toMatchObject({ method: 'POST', body: { note: 'ready' } });
		expect(editor.state.document.state).toBe('in review');
		expect(editor.undoLabel).toBeNull();
		expect(editor.run('nudgeForward')).toBe(false);
		expect(editor.state.said?.text).toContain('in review');
	});

	it('an answer without permission leaves everything as it is and says the server’s sentence', async () => {
		const { editor } = editorOn(sessionDocument({ state: 'in review' }), () => problem(403, 'S01 is your own work.'));
		const outcome = await editor.decide('approved', '');
		expect(outcome).toEqual({ ok: false, sentence: 'S01 is your own work.' });
		expect(editor.state.said?.text).toBe('S01 is your own work.');
	});

	it('asks without acting: could changes nothing', () => {
		const { editor } = editorOn(sessionDocument({ tags: [tag('a', 50, 100)] }));
		const before = editor.state;
		expect(editor.could('nudgeForward')).toBe(true);
		expect(editor.could('accept')).toBe(false);
		expect(editor.state).toBe(before);
	});

	it('shows figures of where things stand', () => {
		const { editor } = editorOn(sessionDocument());
		const before = editor.figures[0].primary?.n;
		editor.run(setOffset('wrenna', 100));
		expect(editor.figures[0].primary?.n).not.toBe(before);
		expect(session().whole.toS).not.toBe(editor.state.whole.toS);
	});
});
