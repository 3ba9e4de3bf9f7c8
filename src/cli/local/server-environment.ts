/** What the server process reads. */
import type { Settings } from '../../lib/server/settings';

export function environmentOf(settings: Settings): Record<string, string | undefined> {
	return {
		...process.env,
		PORT: String(settings.port),
		HOST: settings.host,
		DATABASE_URL: settings.databaseUrl,
		SMTP_URL: settings.smtpUrl,
		MAIL_FROM: settings.mailFrom,
		ORIGIN: settings.origin,
		AUTH_SECRET: settings.authSecret,
		AUTH_URL: `${settings.origin}/auth`,
		OIDC_ISSUER: settings.oidc?.issuer,
		OIDC_CLIENT_ID: settings.oidc?.clientId,
		OIDC_CLIENT_SECRET: settings.oidc?.clientSecret,
		OIDC_NAME: settings.oidc?.name,
		NONIUS_MAX_UPLOAD_MB: String(settings.maxUploadBytes / 1024 / 1024),
		NONIUS_DEMO: settings.demo ? '1' : '0',
		NONIUS_DATA: settings.dataFolder ?? undefined,
		// The form around a file adds a little; the sentence about too large files is ours, not the adapter's.
		BODY_SIZE_LIMIT: String(settings.maxUploadBytes * 4 + 1024 * 1024)
	};
}
