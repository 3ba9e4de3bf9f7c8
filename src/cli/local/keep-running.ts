/** Starts the database again when its server was killed; the application finds it by itself, on the same port. */
import type { Cluster } from './postgres';
import { StopSentence } from './sentence';

/**
 * @param start starts the cluster again
 * @param failed told when that did not succeed: everything else has to stop
 * @returns ends the watch, after what it is just doing
 */
export function keepRunning(first: Cluster, start: () => Promise<Cluster>, say: (words: string) => void, failed: (cause: unknown) => void): () => Promise<void> {
	let cluster = first;
	let looking: Promise<void> | null = null;
	const look = async () => {
		if (cluster.alive()) return;
		say('The database server ended by itself; starting it again …');
		cluster = await start();
		if (cluster.port !== first.port) throw new StopSentence('The database came back on another port. Start again: nothing that was saved is lost.');
		say('The database is back; nothing that was saved is lost.');
	};
	const timer = setInterval(() => {
		looking ??= look().then(
			() => void (looking = null),
			(cause: unknown) => {
				clearInterval(timer);
				failed(cause);
			}
		);
	}, 1000);
	return async () => {
		clearInterval(timer);
		await looking;
	};
}
