/** Where PostgreSQL's programs are; as root, installs Debian's package when there are none. */
import { spawnSync } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, realpathSync } from 'node:fs';
import { delimiter, join } from 'node:path';
import { installDebianPackage, isRoot } from './debian-package';
import { StopSentence } from './sentence';

/** The oldest that the schema is tried on. */
export const OLDEST_POSTGRES = 14;

const DEBIAN = '/usr/lib/postgresql';

/**
 * The folder with `initdb` and `pg_ctl`: on the PATH, else Debian's newest. A cluster that is there already gets the
 * version that made it, since no other can read its files.
 * @throws StopSentence that says what to install
 */
export async function findBinaries(cluster: string, say: (words: string) => void): Promise<string> {
	const version = versionOf(cluster);
	const found = look(version);
	if (found) return found;
	if (version !== null && look(null))
		throw new StopSentence(`The database in ${cluster} was made by PostgreSQL ${version}, which is no longer installed. Install it again (on Debian: apt-get install postgresql-${version}), or set NONIUS_DATA to another folder to begin anew.`);
	if (!isRoot()) throw new StopSentence(`PostgreSQL ${OLDEST_POSTGRES} or newer is not installed. Install it (on Debian: sudo apt-get install postgresql), or set DATABASE_URL to a database that runs elsewhere.`);
	say('PostgreSQL is not installed: installing it with apt-get …');
	await installDebianPackage('postgresql', 'Install PostgreSQL by hand, or set DATABASE_URL to a database that runs elsewhere.');
	const now = look(version);
	if (!now) throw new StopSentence(`PostgreSQL was installed, but no usable version is on the PATH or in ${DEBIAN}. Put its bin folder on the PATH.`);
	return now;
}

/** Major version of the cluster's files, null where there are none yet. */
function versionOf(cluster: string): string | null {
	const file = join(cluster, 'PG_VERSION');
	return existsSync(file) ? readFileSync(file, 'utf8').trim() : null;
}

function look(version: string | null): string | null {
	const debian = existsSync(DEBIAN) ? readdirSync(DEBIAN).sort((a, b) => Number(b) - Number(a)) : [];
	const onPath = (process.env.PATH ?? '').split(delimiter).filter(Boolean);
	const places = [...onPath, ...debian.map((v) => join(DEBIAN, v, 'bin'))].filter((p) => existsSync(join(p, 'initdb')) && existsSync(join(p, 'pg_ctl')));
	return places.find((place) => (version === null ? Number(majorOf(place)) >= OLDEST_POSTGRES : majorOf(place) === version)) ?? null;
}

/** Debian's folder tells; elsewhere the program itself does. */
function majorOf(place: string): string | null {
	const debian = /^\/usr\/lib\/postgresql\/(\d+)\/bin$/.exec(realpathSync(place));
	if (debian) return debian[1];
	const { stdout } = spawnSync(join(place, 'initdb'), ['--version'], { encoding: 'utf8' });
	return /(\d+)(\.|devel|rc|beta|\s|$)/.exec(stdout?.replace(/^[^\d]*/, '') ?? '')?.[1] ?? null;
}
