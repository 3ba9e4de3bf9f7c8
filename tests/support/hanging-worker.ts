/** A background worker in a process of its own that never finishes reading: to be killed in the middle. */
import { engine } from '../../src/lib/server/jobs/in-process-engine';
import { startWorker } from '../../src/lib/server/jobs/worker';

await startWorker({
	databaseUrl: process.argv[2],
	engine: {
		...engine,
		read: () => {
			process.send?.('reading');
			return new Promise(() => undefined);
		}
	}
});
process.send?.('started');
