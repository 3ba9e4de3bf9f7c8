/** A local stand-in for the hosted mail server: takes every mail over SMTP and keeps it in the data folder. */
import { chmodSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { simpleParser } from 'mailparser';
import { SMTPServer } from 'smtp-server';
import { makeFolder } from './data-folder';
import { freePort } from './free-port';
import type { CaughtMail } from '../../lib/server/mail/caught';

export interface MailCatcher {
	smtpUrl: string;
	stop(): Promise<void>;
}

/** @param onMail told of every mail after it is kept */
export async function startMailCatcher(folder: string, onMail: (mail: CaughtMail) => void = () => {}): Promise<MailCatcher> {
	// The mails hold sign-in links: they are for whoever runs this alone.
	chmodSync(makeFolder(folder, 0o700), 0o700);
	const port = await freePort();
	let count = 0;
	const server = new SMTPServer({
		authOptional: true,
		disabledCommands: ['STARTTLS', 'AUTH'],
		logger: false,
		closeTimeout: 1000,
		onData(stream, _session, done) {
			simpleParser(stream).then(
				(parsed) => {
					const at = new Date().toISOString();
					const to = (Array.isArray(parsed.to) ? parsed.to : parsed.to ? [parsed.to] : []).map((a) => a.text).join(', ');
					const text = parsed.text ?? '';
					const mail: CaughtMail = { at, to, subject: parsed.subject ?? '', text, link: /https?:\/\/\S+/.exec(text)?.[0] ?? null };
					const file = join(folder, `${at.replaceAll(':', '-')}-${String(++count).padStart(4, '0')}.json`);
					// Whoever lists the folder meanwhile finds whole mails only.
					writeFileSync(`${file}.part`, JSON.stringify(mail, null, '\t'), { mode: 0o600 });
					renameSync(`${file}.part`, file);
					onMail(mail);
					done();
				},
				(cause: unknown) => done(cause instanceof Error ? cause : new Error(String(cause)))
			);
		}
	});
	await new Promise<void>((ready, failed) => {
		server.once('error', failed);
		server.listen(port, '127.0.0.1', ready);
	});
	// Once it listens, one broken connection is no reason to stop.
	server.on('error', () => {});
	return { smtpUrl: `smtp://127.0.0.1:${port}`, stop: () => new Promise((done) => server.close(() => done())) };
}
