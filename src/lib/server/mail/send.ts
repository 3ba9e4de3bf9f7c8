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
		transport = nodemailer.createTransport(settings.smtpUrl);
		transports.set(settings.smtpUrl, transport);
	}
	await transport.sendMail({ from: settings.mailFrom, ...mail });
}
