/** Notices that `npm` is gone: who kills npm alone means everything that it started. */
import { parentOf } from './process-table';

/**
 * Calls back once when the npm that runs this script has ended. npm runs a shell that runs us; a killed npm leaves the
 * shell, a killed shell leaves us. Started without npm, nothing is watched: a parent that leaves on purpose may.
 */
export function whenAbandoned(script: string, then: () => void): void {
	if (process.env.npm_lifecycle_event !== script) return;
	const before = ancestry();
	const timer = setInterval(() => {
		if (ancestry() === before) return;
		clearInterval(timer);
		then();
	}, 500);
	timer.unref();
}

const ancestry = () => `${process.ppid} ${parentOf(process.ppid) ?? ''}`;
