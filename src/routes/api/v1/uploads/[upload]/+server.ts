import { json } from '@sveltejs/kit';
import { z } from 'zod';
import { authorise } from '$lib/server/auth/actor';
import { requireActor } from '$lib/server/auth/require';
import { jsonBody } from '$lib/server/http/json-body';
import { endpoint } from '$lib/server/http/endpoint';
import { answerDevice, keepApart, placeInSession, takeOut } from '$lib/server/import/answers';
import { databaseQueue } from '$lib/server/jobs/queue';
import type { RequestHandler } from './$types';

const Answer = z.discriminatedUnion('act', [
	z.object({ act: z.literal('device'), deviceModelId: z.uuid() }),
	z.object({ act: z.literal('session'), sessionId: z.uuid() }),
	z.object({ act: z.literal('new-session') }),
	z.object({ act: z.literal('keep-apart') })
]);

/** Answers what an upload asks, or corrects where it was put. */
export const PATCH: RequestHandler = endpoint(async ({ locals, params, request }) => {
	const actor = requireActor(locals);
	authorise(actor, 'recording.upload');
	const uploadId = z.uuid().parse(params.upload);
	const answer = Answer.parse(await jsonBody(request));
	const { db } = locals;
	if (answer.act === 'device') return json({ settled: await answerDevice(db, databaseQueue, actor, uploadId, answer.deviceModelId) });
	if (answer.act === 'keep-apart') await keepApart(db, actor, uploadId);
	else await placeInSession(db, databaseQueue, actor, uploadId, answer.act === 'session' ? answer.sessionId : null);
	return json({ settled: 1 });
});

/** Takes the file out again, with everything that came from it. */
export const DELETE: RequestHandler = endpoint(async ({ locals, params }) => {
	const actor = requireActor(locals);
	authorise(actor, 'recording.upload');
	await takeOut(locals.db, actor, z.uuid().parse(params.upload));
	return new Response(null, { status: 204 });
});
