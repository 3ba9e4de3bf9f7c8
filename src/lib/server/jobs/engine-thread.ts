/** Runs in a thread of its own: answers one request after the other with the same engine that everybody uses. */
import { parentPort } from 'node:worker_threads';
import { engine } from './in-process-engine';
import { READY, type ThreadAnswer, type ThreadRequest } from './threaded-engine';

if (parentPort === null) throw new Error('The engine thread is started by the threaded engine, not by itself.');
const port = parentPort;

port.on('message', (request: ThreadRequest) => {
	work(request)
		.then((value): ThreadAnswer => ({ id: request.id, ok: true, value }))
		.catch((cause: unknown): ThreadAnswer => ({ id: request.id, ok: false, message: cause instanceof Error ? (cause.stack ?? cause.message) : String(cause) }))
		.then((answer) => port.postMessage(answer));
});
port.postMessage(READY);

function work(request: ThreadRequest): Promise<unknown> {
	return request.task === 'read' ? engine.read(request.bytes, request.fileName) : engine.estimateShift(request.reference, request.wearable);
}
