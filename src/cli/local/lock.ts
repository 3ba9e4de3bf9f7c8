/** One start at a time on a data folder. */
import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { StopSentence } from './sentence';

/** @throws StopSentence when another start holds the folder; a lock whose process is gone is taken over */
export function takeLock(file: string): () => void {
	for (let attempt = 0; attempt < 2; attempt++) {
		try {
			writeFileSync(file, String(process.pid), { flag: 'wx' });
			return () => rmSync(file, { force: true });
		} catch {
			const pid = existsSync(file) ? Number(readFileSync(file, 'utf8')) : NaN;
			if (Number.isInteger(pid) && pid > 0 && pid !== process.pid && isNonius(pid))
				throw new StopSentence(`Nonius is already running on this data folder (process ${pid}). Stop it with Ctrl-C there, or set NONIUS_DATA to another folder.`);
			rmSync(file, { force: true });
		}
	}
	throw new StopSentence(`The lock ${file} could not be taken. Try again.`);
}

function isNonius(pid: number): boolean {
	try {
		process.kill(pid, 0);
	} catch (cause) {
		return (cause as NodeJS.ErrnoException).code === 'EPERM';
	}
	// After a crash the number may belong to another program.
	const file = `/proc/${pid}/cmdline`;
	return existsSync(file) ? readFileSync(file, 'utf8').includes('bootstrap.mjs') : true;
}
