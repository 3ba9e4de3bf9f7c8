/** The built application as a user gets it: fresh seeded database, mail catcher, a local OpenID Connect provider. */
import { mkdirSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { OAuth2Server } from 'oauth2-mock-server';
import { dataFolder } from '../../src/cli/local/data-folder';
import { startMailCatcher } from '../../src/cli/local/mail-catcher';
import { freePort } from '../../src/cli/local/free-port';
import { launchServer } from '../../src/cli/local/server';
import { environmentOf } from '../../src/cli/local/server-environment';
import { seedDemo } from '../../src/cli/seed';
import { loadSettings } from '../../src/lib/server/settings';
import { freshDatabase } from './database';

/** Address that the local provider vouches for. */
export const OIDC_EMAIL = 'sam.oidc@bramling.example';

export default async function startApplication(): Promise<() => Promise<void>> {
	const folder = join(dataFolder(), 'e2e');
	rmSync(folder, { recursive: true, force: true });
	mkdirSync(folder, { recursive: true });
	const database = await freshDatabase();
	await seedDemo(database.db);
	const mail = await startMailCatcher(join(folder, 'mail'));
	const provider = new OAuth2Server();
	await provider.issuer.keys.generate('RS256');
	await provider.start(0, '127.0.0.1');
	// The provider's answers name a person whose address is verified.
	provider.service.on('beforeTokenSigning', (token: { payload: Record<string, unknown> }) => {
		Object.assign(token.payload, { sub: 'sam-oidc', email: OIDC_EMAIL, email_verified: true, name: 'Sam Oidc' });
	});
	provider.service.on('beforeUserinfo', (answer: { body: Record<string, unknown> | '' }) => {
		answer.body = { sub: 'sam-oidc', email: OIDC_EMAIL, email_verified: true, name: 'Sam Oidc' };
	});

	const port = await freePort();
	const settings = loadSettings({
		PORT: String(port),
		HOST: '127.0.0.1',
		DATABASE_URL: database.url,
		SMTP_URL: mail.smtpUrl,
		ORIGIN: `http://127.0.0.1:${port}`,
		AUTH_SECRET: 'a secret for tests only, long enough for anyone',
		OIDC_ISSUER: provider.issuer.url ?? undefined,
		OIDC_CLIENT_ID: 'nonius-tests',
		OIDC_CLIENT_SECRET: 'nonius-tests',
		OIDC_NAME: 'Bramling identity',
		NONIUS_DEMO: '1',
		NONIUS_DATA: folder
	});
	const server = launchServer(environmentOf(settings), { quiet: true });
	await server.ready();
	process.env.NONIUS_E2E_ORIGIN = settings.origin;
	process.env.NONIUS_E2E_DATA = folder;
	process.env.NONIUS_E2E_DATABASE_URL = database.url;
	return async () => {
		await server.stop();
		await provider.stop();
		await mail.stop();
		await database.drop();
	};
}
