/**
 * Sign-in through Auth.js with sessions in the database: a link by e-mail, and any OpenID Connect provider.
 */
import { DrizzleAdapter } from '@auth/drizzle-adapter';
import { SvelteKitAuth, type SvelteKitAuthConfig } from '@auth/sveltekit';
import Nodemailer from '@auth/sveltekit/providers/nodemailer';
import type { Database } from '../db/client';
import { accounts, authSessions, users, verificationTokens } from '../db/schema';
import { sendMail } from '../mail/send';
import { signInMail } from '../mail/sign-in-mail';
import type { Settings } from '../settings';

export const LINK_MINUTES = 15;

/** How long a browser stays signed in without use, days. */
export const SESSION_DAYS = 30;

/** Name of the cookie that holds the session's token; the browser accepts the prefix over https only. */
export function sessionCookieName(settings: Pick<Settings, 'origin'>): string {
	return settings.origin.startsWith('https:') ? '__Secure-authjs.session-token' : 'authjs.session-token';
}

export function authConfig(db: Database, settings: Settings): SvelteKitAuthConfig {
	const secure = settings.origin.startsWith('https:');
	return {
		adapter: DrizzleAdapter(db, { usersTable: users, accountsTable: accounts, sessionsTable: authSessions, verificationTokensTable: verificationTokens }),
		secret: settings.authSecret,
		session: { strategy: 'database', maxAge: SESSION_DAYS * 86_400 },
		// The server's own address comes from ORIGIN (see the start command), never from what a request claims.
		trustHost: true,
		useSecureCookies: secure,
		pages: { signIn: '/signin', verifyRequest: '/signin/mail', error: '/signin' },
		providers: [
			Nodemailer({
				server: settings.smtpUrl,
				from: settings.mailFrom,
				maxAge: LINK_MINUTES * 60,
				normalizeIdentifier: (identifier) => identifier.trim().toLowerCase(),
				sendVerificationRequest: ({ identifier, url }) => sendMail(settings, signInMail(identifier, url, LINK_MINUTES))
			}),
			...(settings.oidc
				? [
						{
							id: 'oidc',
							name: settings.oidc.name,
							type: 'oidc' as const,
							issuer: settings.oidc.issuer,
							clientId: settings.oidc.clientId,
							clientSecret: settings.oidc.clientSecret,
							checks: ['pkce' as const, 'state' as const],
							// A verified address at the provider is the same person as the address that a team invited.
							allowDangerousEmailAccountLinking: true
						}
					]
				: [])
		],
		callbacks: {
			signIn({ account, profile }) {
				if (account?.provider !== 'oidc') return true;
				return Boolean(profile?.email) && profile?.email_verified !== false;
			}
		},
		logger: { error: () => {}, warn: () => {} }
	};
}

let instance: ReturnType<typeof SvelteKitAuth> | null = null;

/** The one Auth.js instance of the process. */
export function authOf(db: Database, settings: Settings): ReturnType<typeof SvelteKitAuth> {
	instance ??= SvelteKitAuth(authConfig(db, settings));
	return instance;
}
