/** Installs a Debian package as root; everybody else gets a sentence from the caller instead. */
import { StopSentence } from './sentence';
import { run } from './run';

export const isRoot = () => process.getuid?.() === 0;

/** @throws StopSentence when apt-get is missing or does not succeed */
export async function installDebianPackage(name: string, remedy: string): Promise<void> {
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	for (const argv of [
		['update', '-q'],
		['install', '-y', '-q', '--no-install-recommends', name]
	]) {
		const { status, missing } = await run('apt-get', argv, { env, stdout: 'stderr' });
		if (missing) throw new StopSentence(`There is no apt-get on this machine to install ${name} with. ${remedy}`);
		if (status !== 0) throw new StopSentence(`apt-get ${argv[0]} did not succeed; its own words are above. ${remedy}`);
	}
}
