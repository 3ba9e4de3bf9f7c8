/** Ports on this machine: which is free, and waiting for one that is being given up. */
import { createServer } from 'node:net';
import { StopSentence } from './sentence';

/** The wanted port when it is free, else any free one on loopback. */
export async function freePort(wanted?: number): Promise<number> {
	const port = (wanted ? await tryPort('127.0.0.1', wanted) : null) ?? (await tryPort('127.0.0.1', 0));
	if (port === null) throw new StopSentence('No free port on 127.0.0.1.');
	return port;
}

/**
 * Waits a moment for the port: a server whose start was killed needs some seconds to notice.
 * @throws StopSentence when another program keeps it, or when this machine does not have that address
 */
export async function portToListenOn(host: string, port: number, say: (words: string) => void = () => {}, waitMs = 9000): Promise<void> {
	const end = Date.now() + waitMs;
	for (let told = false; ; told = true) {
		const taken = await whyNot(host, port);
		if (taken === null) return;
		if (taken === 'EACCES') throw new StopSentence(`Port ${port} is kept for the system administrator. Set PORT to a number from 1024 to 65535.`);
		if (taken !== 'EADDRINUSE') throw new StopSentence(`The server cannot listen on HOST=${host} (${taken}). Set HOST to an address of this machine, or leave it out.`);
		if (Date.now() > end) throw new StopSentence(`Port ${port} on ${host} is taken by another program. Stop that one, or set PORT to another number.`);
		if (!told) say(`Port ${port} is still taken; waiting a moment for it …`);
		await new Promise((r) => setTimeout(r, 200));
	}
}

async function tryPort(host: string, port: number): Promise<number | null> {
	const outcome = await listen(host, port);
	return typeof outcome === 'number' ? outcome : null;
}

async function whyNot(host: string, port: number): Promise<string | null> {
	const outcome = await listen(host, port);
	return typeof outcome === 'number' ? null : outcome;
}

/** The port that was got and given back, or the code of the refusal. */
function listen(host: string, port: number): Promise<number | string> {
	return new Promise((done) => {
		const server = createServer();
		server.once('error', (cause: NodeJS.ErrnoException) => done(cause.code ?? cause.message));
		server.listen({ host, port, exclusive: true }, () => {
			const address = server.address();
			server.close(() => done(typeof address === 'object' && address ? address.port : port));
		});
	});
}
