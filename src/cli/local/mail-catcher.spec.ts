import { mkdtempSync, readdirSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { listCaughtMails, type CaughtMail } from '../../lib/server/mail/caught';
import { sendMail } from '../../lib/server/mail/send';
import { startMailCatcher } from './mail-catcher';

const folder = () => mkdtempSync(join(tmpdir(), 'nonius-mail-'));

test('a mail sent over SMTP is kept whole, told with its link, and listed newest first', async () => {
	const data = folder();
	const told: CaughtMail[] = [];
	const catcher = await startMailCatcher(join(data, 'mail'), (mail) => told.push(mail));
	const settings = { smtpUrl: catcher.smtpUrl, mailFrom: 'Nonius <nonius@bench.example>' };
	try {
		await sendMail(settings, { to: 'rt@bramling.example', subject: 'First', text: 'No address in here.' });
		// Long lines and letters beyond ASCII are what transfer encodings break.
		const link = `http://127.0.0.1:4180/auth/callback/nodemailer?token=${'0123456789abcdef'.repeat(8)}&email=rt%40bramling.example`;
		await sendMail(settings, { to: 'rt@bramling.example', subject: 'Zweiter Brief, naïve', text: `Follow this link:\n\n${link}\n\nIt works once.` });
		expect(told.map((m) => m.link)).toEqual([null, link]);
		const listed = await listCaughtMails(data);
		expect(listed.map((m) => m.subject)).toEqual(['Zweiter Brief, naïve', 'First']);
		expect(listed[0].to).toBe('rt@bramling.example');
		expect(listed[0].link).toBe(link);
	} finally {
		await catcher.stop();
	}
});

test('kept mails hold sign-in links and are for nobody else on the machine', async () => {
	const data = folder();
	const catcher = await startMailCatcher(join(data, 'mail'));
	try {
		await sendMail({ smtpUrl: catcher.smtpUrl, mailFrom: 'nonius@bench.example' }, { to: 'so@bramling.example', subject: 'Link', text: 'x' });
		expect(statSync(join(data, 'mail')).mode & 0o077).toBe(0);
		for (const name of readdirSync(join(data, 'mail'))) expect(statSync(join(data, 'mail', name)).mode & 0o077).toBe(0);
	} finally {
		await catcher.stop();
	}
});

test('a mail that no server takes is an error to whoever sends it', async () => {
	const catcher = await startMailCatcher(join(folder(), 'mail'));
	await catcher.stop();
	await expect(sendMail({ smtpUrl: catcher.smtpUrl, mailFrom: 'nonius@bench.example' }, { to: 'so@bramling.example', subject: 'Link', text: 'x' })).rejects.toThrow();
});
