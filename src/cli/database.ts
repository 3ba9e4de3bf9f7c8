/** `node src/cli/bootstrap.mjs database [NAME]`: a running local database for development; prints its DATABASE_URL. */
import { join } from 'node:path';
import { dataFolder } from './local/data-folder';
import { ensureDatabase } from './local/local-parts';
import { startCluster } from './local/postgres';
import { StopSentence } from './local/sentence';

export async function main([name = 'nonius_dev']: string[]): Promise<number> {
	try {
		const cluster = await startCluster(join(dataFolder(), 'postgres'), (words) => console.error(words));
		console.log(await ensureDatabase(cluster, name));
		return 0;
	} catch (cause) {
		if (!(cause instanceof StopSentence)) throw cause;
		console.error(cause.message);
		return 1;
	}
}
