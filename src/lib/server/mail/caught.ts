/** Mails that the local catcher kept, newest first. */
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';

export interface CaughtMail {
	at: string;
	to: string;
	subject: string;
	text: string;
	/** The first address in the text. */
	link: string | null;
}

export async function listCaughtMails(dataFolder: string, limit = 50): Promise<CaughtMail[]> {
	const folder = join(dataFolder, 'mail');
	const names = (await readdir(folder).catch(() => [])).filter((n) => n.endsWith('.json')).sort().reverse().slice(0, limit);
	return Promise.all(names.map(async (name) => JSON.parse(await readFile(join(folder, name), 'utf8')) as CaughtMail));
}
