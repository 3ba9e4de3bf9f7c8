/** The questions of the import page, one for each answer that is needed: files of one origin are asked about once. */
import type { BoardFile, BoardSession, ImportBoard } from './board';

export type OpenQuestion =
	| { kind: 'device'; key: string; files: BoardFile[] }
	| { kind: 'place'; key: string; file: BoardFile }
	| { kind: 'no-reference'; key: string; session: BoardSession };

export function openQuestions(board: ImportBoard): OpenQuestion[] {
	const asking = [...board.loose, ...board.sessions.flatMap((s) => s.files)].filter((f) => f.state === 'asking');
	const byOrigin = new Map<string, BoardFile[]>();
	const placing: OpenQuestion[] = [];
	for (const file of asking) {
		if (file.question?.code === 'which-device') byOrigin.set(file.question.key, [...(byOrigin.get(file.question.key) ?? []), file]);
		else placing.push({ kind: 'place', key: file.uploadId, file });
	}
	const devices = [...byOrigin].map(([key, files]): OpenQuestion => ({ kind: 'device', key, files }));
	const withoutReference = board.sessions
		.filter((s) => !s.hasReference && !s.files.some((f) => f.question?.code === 'clock'))
		.map((session): OpenQuestion => ({ kind: 'no-reference', key: session.sessionId, session }));
	return [...devices, ...placing, ...withoutReference];
}

/** Is there a wearable beside its reference whose offset is not known yet? */
export function offsetsSearched(board: ImportBoard): boolean {
	const wearables = new Set(board.devices.filter((d) => d.role === 'wearable').map((d) => d.modelId));
	return board.sessions.some((s) => s.hasReference && s.files.some((f) => f.recording?.offset === null && wearables.has(f.recording.deviceModelId ?? '')));
}

/** Files by where they stand, for the sentence and the ruler. */
export function tally(board: ImportBoard): { ready: number; ask: number; out: number } {
	const files = [...board.loose, ...board.sessions.flatMap((s) => s.files)];
	return { ready: files.filter((f) => f.state === 'filed').length, ask: files.filter((f) => f.state === 'asking').length, out: board.leftOut.length };
}

/** `16 are ready, 3 need an answer from you, 2 are left out.` */
export function tallySentence({ ready, ask, out }: ReturnType<typeof tally>, underWay: number): string {
	const files = ready + ask + out;
	if (files + underWay === 0) return 'No files yet. Drop the recordings of a session here: the strap and every wearable.';
	const parts = [
		`${ready} ${ready === 1 ? 'is' : 'are'} in ${ready === 1 ? 'its session' : 'their sessions'}`,
		ask > 0 ? `${ask} ${ask === 1 ? 'needs' : 'need'} an answer from you` : '',
		out > 0 ? `${out} ${out === 1 ? 'is' : 'are'} left out` : '',
		underWay > 0 ? `${underWay} ${underWay === 1 ? 'is' : 'are'} on the way in` : ''
	].filter(Boolean);
	return `${files + underWay} ${files + underWay === 1 ? 'file' : 'files'}: ${parts.join(', ')}.`;
}
