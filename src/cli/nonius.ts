/** `npm run -s nonius -- inspect | align | agree …`: the engine for scripts, batch work and checks. */
const USAGE = `Usage:
  npm run -s nonius -- inspect FILE…                                   what each file holds
  npm run -s nonius -- align REFERENCE WEARABLE [REFERENCE WEARABLE …]  where the clocks stand
  npm run -s nonius -- agree PAIRS.csv…                                 agreement of tables of pairs

One JSON line per file, pair or table on stdout; messages on stderr. Exit status 1 when an item was refused,
2 when the call itself is wrong.`;

const COMMANDS: Record<string, () => Promise<(args: string[]) => Promise<number>>> = {
	inspect: async () => (await import('./inspect')).inspect,
	align: async () => (await import('./align')).align,
	agree: async () => (await import('./agree')).agree
};

export async function main([command, ...args]: string[]): Promise<number> {
	if (command === 'help' || command === '--help' || command === '-h') {
		console.error(USAGE);
		return 0;
	}
	if (!command || !Object.hasOwn(COMMANDS, command)) {
		console.error(command ? `Unknown command "${command}".\n\n${USAGE}` : USAGE);
		return 2;
	}
	// Who reads only the first lines, as `head` does, closes the pipe: that is no fault.
	process.stdout.on('error', (cause: NodeJS.ErrnoException) => {
		if (cause.code !== 'EPIPE') throw cause;
		process.exit();
	});
	return (await COMMANDS[command]())(args);
}
