/** Does background work in the caller's own turn, in order, until nothing is left: demo content and tests. */
import type { Queryable } from '../db/client';
import { askClock } from '../import/ask-clock';
import { proposeShift } from '../import/propose-shift';
import { readUpload } from '../import/read-upload';
import type { Engine } from './engine';
import { QUEUES, type JobData, type JobList } from './queue';

export async function workOff(db: Queryable, engine: Engine, list: JobList): Promise<void> {
	for (let job = list.jobs.shift(); job !== undefined; job = list.jobs.shift()) {
		if (isOf(job, QUEUES.readUpload)) await readUpload(db, engine, list, job.data.uploadId);
		else if (isOf(job, QUEUES.proposeShift)) await proposeShift(db, engine, job.data.recordingId);
		else if (isOf(job, QUEUES.askClock)) await askClock(db, engine, job.data.recordingId);
	}
}

function isOf<N extends keyof JobData>(job: { queue: keyof JobData; data: JobData[keyof JobData] }, queue: N): job is { queue: N; data: JobData[N] } {
	return job.queue === queue;
}
