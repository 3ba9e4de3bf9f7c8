import { describe, expect, it } from 'vitest';
import type { BoardFile, ImportBoard } from './board';
import { openQuestions, tally, tallySentence } from './questions';

const file = (over: Partial<BoardFile>): BoardFile => ({
	uploadId: Math.random().toString(36), fileName: 'a.csv', state: 'filed', progress: 1, messageCode: null, message: null, question: null, uploadedBy: 'RT', recording: null, ...over
});
const board = (over: Partial<ImportBoard>): ImportBoard => ({
	devices: [], participants: [], activities: [], sessions: [], loose: [], leftOut: [], underWay: 0, olderSessions: 0, may: { upload: true, sort: true, addDevices: true }, ...over
});

describe('questions of the import page', () => {
	it('asks once for three files of one origin', () => {
		const loose = [1, 2, 3].map(() => file({ state: 'asking', question: { code: 'which-device', key: 'origin:csv', suggestedModelId: null } }));
		const questions = openQuestions(board({ loose }));
		expect(questions).toHaveLength(1);
		expect(questions[0]).toMatchObject({ kind: 'device', key: 'origin:csv' });
	});
	it('does not ask for the strap file while it asks whether the clock is in another zone', () => {
		const session = {
			sessionId: 's', code: 'S01', state: 'imported' as const, participantId: null, participantCode: null, activity: null, startS: 0, endS: 60, hasReference: false,
			files: [file({ state: 'asking', question: { code: 'clock', sessionId: 't', zoneShiftS: 3600, startsAfterReferenceS: 4 } })]
		};
		expect(openQuestions(board({ sessions: [session] })).map((q) => q.kind)).toEqual(['place']);
		expect(openQuestions(board({ sessions: [{ ...session, files: [file({})] }] })).map((q) => q.kind)).toEqual(['no-reference']);
	});
	it('counts every file once in the sentence', () => {
		const counts = tally(board({ loose: [file({ state: 'asking' }), file({ state: 'reading' })], leftOut: [file({ state: 'refused' })] }));
		expect(counts).toEqual({ ready: 0, ask: 1, out: 1 });
		expect(tallySentence({ ready: 1, ask: 1, out: 1 }, 2)).toBe('5 files: 1 is in its session, 1 needs an answer from you, 1 is left out, 2 are on the way in.');
	});
});
