import { json } from '@sveltejs/kit';
import { requireActor } from '$lib/server/auth/require';
import { invalid } from '$lib/server/errors';
import { endpoint } from '$lib/server/http/endpoint';
import { importBoard } from '$lib/server/import/board';
import { receiveFiles } from '$lib/server/import/receive';
import { studyBySlug } from '$lib/server/import/study';
import { authorise } from '$lib/server/auth/actor';
import { databaseQueue } from '$lib/server/jobs/queue';
import type { RequestHandler } from './$types';

/** What the import page shows: found sessions, files on their way in, questions, what was left out. */
export const GET: RequestHandler = endpoint(async ({ locals, params }) => {
	const actor = requireActor(locals);
	authorise(actor, 'recording.upload');
	const study = await studyBySlug(locals.db, actor, params.study);
	return json(await importBoard(locals.db, actor, study.id), { headers: { 'cache-control': 'no-store' } });
});

/** Takes in files: multipart/form-data, every field that is a file. Answers with one receipt a file, in order. */
export const POST: RequestHandler = endpoint(async ({ locals, params, request }) => {
	const actor = requireActor(locals);
	authorise(actor, 'recording.upload');
	const study = await studyBySlug(locals.db, actor, params.study);
	const form = await request.formData().catch(() => {
		throw invalid('The upload broke off or is not multipart/form-data. Nothing was stored; send the files again.');
	});
	const files = [...form.values()].filter((value) => value instanceof File);
	if (files.length === 0) throw invalid('No file came with the upload. Choose one or more files and send them again.');
	const read = await Promise.all(files.map(async (file) => ({ fileName: file.name, bytes: new Uint8Array(await file.arrayBuffer()) })));
	return json({ receipts: await receiveFiles(locals.db, databaseQueue, actor, study, read, locals.settings.maxUploadBytes) }, { status: 202 });
});
