/** What Linux says of other processes; empty answers where there is no /proc. */
import { existsSync, readdirSync, readFileSync, readlinkSync, statSync } from 'node:fs';

/** Fields of /proc/PID/stat after the name, which may itself hold spaces and brackets. */
function statFields(pid: number): string[] | null {
	try {
		const text = readFileSync(`/proc/${pid}/stat`, 'utf8');
		return text.slice(text.lastIndexOf(')') + 2).split(' ');
	} catch {
		return null;
	}
}

/** When the process began, in ticks since boot: with its number it names one process for good. */
export const startTicks = (pid: number): string | null => statFields(pid)?.[19] ?? null;

export const parentOf = (pid: number): number | null => {
	const field = statFields(pid)?.[1];
	return field === undefined ? null : Number(field);
};

/** User whose process it is; null where the machine does not tell. */
export function ownerOf(pid: number): number | null {
	try {
		return statSync(`/proc/${pid}`).uid;
	} catch {
		return null;
	}
}

/** `ended`: dead, but its parent has not taken note yet, so that its number still answers to signals. */
export function stateOf(pid: number): 'running' | 'ended' | 'gone' {
	try {
		process.kill(pid, 0);
	} catch (cause) {
		// Not ours to signal is running all the same.
		if ((cause as NodeJS.ErrnoException).code !== 'EPERM') return 'gone';
	}
	return ['Z', 'X'].includes(statFields(pid)?.[0] ?? '') ? 'ended' : 'running';
}

export const isAlive = (pid: number): boolean => stateOf(pid) === 'running';

/** When the machine started, ms since 1970; 0 where it does not tell. */
export function bootTimeMs(): number {
	try {
		return Number(/^btime (\d+)$/m.exec(readFileSync('/proc/stat', 'utf8'))?.[1] ?? 0) * 1000;
	} catch {
		return 0;
	}
}

/** Processes that work in this folder; none where the machine does not tell. PostgreSQL's all work in their cluster's. */
export function processesIn(folder: string): number[] {
	if (!existsSync('/proc/self/cwd')) return [];
	return readdirSync('/proc')
		.map(Number)
		.filter((pid) => {
			if (!Number.isInteger(pid) || pid <= 0) return false;
			try {
				return readlinkSync(`/proc/${pid}/cwd`) === folder;
			} catch {
				return false;
			}
		});
}
