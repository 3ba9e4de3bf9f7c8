/**
 * Entry of `npm start`, `npm test`, `npm run bench` and `npm run nonius`: plain Node, since nothing else may be there
 * yet. Installs the packages when they are missing or older than the lock file, then hands over to the command.
 */
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..', '..');
const COMMANDS = ['start', 'test', 'bench', 'nonius', 'database', 'fuzz'];

const [command, ...args] = process.argv.slice(2);
if (!COMMANDS.includes(command)) fail(`Unknown command "${command ?? ''}". Known: ${COMMANDS.join(', ')}.`, 2);
const [major, minor] = process.versions.node.split('.').map(Number);
if (major < 20 || (major === 20 && minor < 11)) fail(`Nonius needs Node.js 20.11 or newer; this is ${process.versions.node}.`);

// npm runs its scripts in the project's folder and tells where the user was.
const calledFrom = process.env.npm_lifecycle_event === command && process.env.INIT_CWD ? process.env.INIT_CWD : process.cwd();
process.chdir(root);
installPackages();
if (!existsSync('.svelte-kit/tsconfig.json')) run(process.execPath, ['node_modules/@sveltejs/kit/svelte-kit.js', 'sync'], 'svelte-kit sync');

const { register } = await import(pathToFileURL(join(root, 'node_modules/tsx/dist/esm/api/index.mjs')).href);
register();
// Files are named from where the user stands; everything else works in the project.
if (command === 'nonius' && existsSync(calledFrom)) process.chdir(calledFrom);
const { main } = await import(pathToFileURL(join(root, 'src/cli', `${command}.ts`)).href);
const status = await main(args);
if (typeof status === 'number') process.exitCode = status;

/** `npm ci` when node_modules is not what the lock file says; a stamp inside it remembers for which lock it was made. */
function installPackages() {
	const lock = createHash('sha256').update(readFileSync('package-lock.json')).digest('hex');
	const stamp = 'node_modules/.nonius-lock';
	if (existsSync(stamp) && readFileSync(stamp, 'utf8') === lock) return;
	console.error('Installing packages from package-lock.json …');
	const npm = process.env.npm_execpath;
	// The tests' packages too, whatever NODE_ENV says: start and test share one set.
	const argv = ['ci', '--include=dev', '--no-audit', '--no-fund'];
	if (npm && existsSync(npm)) run(process.execPath, [npm, ...argv], 'npm ci');
	else run('npm', argv, 'npm ci');
	writeFileSync(stamp, lock);
}

function run(file, argv, words) {
	// What these tools say goes to stderr: stdout belongs to the command's answer.
	const { status, error } = spawnSync(file, argv, { stdio: ['ignore', 2, 2] });
	if (error || status !== 0) fail(`${words} did not succeed${error ? `: ${error.message}` : ` (exit status ${status})`}. Its own words are above.`);
}

function fail(sentence, status = 1) {
	console.error(sentence);
	process.exit(status);
}
