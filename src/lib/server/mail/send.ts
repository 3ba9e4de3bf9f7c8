/** Mail through SMTP: the local catcher in development, a real server in a deployment. */
import nodemailer, { type Transporter } from 'nodemailer';
import type { Settings } from '../settings';

export interface Mail {
	to: string;
	subject: string;
	/** Always there: mails are plain first. */
	text: string;
	html?: string;
}

const transports = new Map<string, Transporter>();

/** Sends one mail and waits until the server has taken it. @throws when it has not */
export async function sendMail(settings: Pick<Settings, 'smtpUrl' | 'mailFrom'>, mail: Mail): Promise<void> {
	let transport = transports.get(settings.smtpUrl);
	if (!transport) {
		// A mail server that says nothing must not keep a sign-in page waiting.
		transport = nodemailer.createTransport({ url: settings.smtpUrl, connectionTimeout: 10_000, greetingTimeout: 10_000, socketTimeout: 20_000 });
		transports.set(settings.smtpUrl, transport);
	}
	await transport.sendMail({ from: settings.mailFrom, ...mail });
}
