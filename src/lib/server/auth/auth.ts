/**
 * Sign-in through Auth.js with sessions in the database: a link by e-mail, and any OpenID Connect provider.
 */
import { DrizzleAdapter } from '@auth/drizzle-adapter';
import { AuthError, SvelteKitAuth, type SvelteKitAuthConfig } from '@auth/sveltekit';
import Nodemailer from '@auth/sveltekit/providers/nodemailer';
import type { RequestEvent } from '@sveltejs/kit';
import type { Database } from '../db/client';
import { accounts, authSessions, users, verificationTokens } from '../db/schema';
import { log } from '../http/log';
import { sendMail } from '../mail/send';
import { signInMail } from '../mail/sign-in-mail';
import type { Settings } from '../settings';

/** Where Auth.js answers: `/auth/callback/…`. */
export const AUTH_PATH = '/auth';

export const LINK_MINUTES = 15;

/** How long a browser stays signed in without use, days. */
export const SESSION_DAYS = 30;

/** Name of the cookie that holds the session's token; the browser accepts the prefix over https only. */
export function sessionCookieName(settings: Pick<Settings, 'origin'>): string {
	return isSecure(settings) ? '__Secure-authjs.session-token' : 'authjs.session-token';
}

export function isSecure(settings: Pick<Settings, 'origin'>): boolean {
	return settings.origin.startsWith('https:');
}

/** The mail server did not take the link. */
export class LinkNotSent extends AuthError {
	static type = 'EmailSignInError' as const;
}

export function authConfig(db: Database, settings: Settings): SvelteKitAuthConfig {
	return {
		adapter: DrizzleAdapter(db, { usersTable: users, accountsTable: accounts, sessionsTable: authSessions, verificationTokensTable: verificationTokens }),
		secret: settings.authSecret,
		session: { strategy: 'database', maxAge: SESSION_DAYS * 86_400 },
		// Requests reach Auth.js with the address of ORIGIN only: see `atOrigin`.
		trustHost: true,
		useSecureCookies: isSecure(settings),
		pages: { signIn: '/signin', verifyRequest: '/signin/mail', error: '/signin' },
		providers: [
			// The library's own reading of the address stays: it refuses what mail servers would read as two.
			Nodemailer({
				server: settings.smtpUrl,
				from: settings.mailFrom,
				maxAge: LINK_MINUTES * 60,
				sendVerificationRequest({ identifier, url }) {
					const sent = sendMail(settings, signInMail(identifier, url, LINK_MINUTES)).catch((cause: unknown) => {
						throw new LinkNotSent('The mail server did not take the sign-in link.', { cause });
					});
					// Auth.js looks at this promise only after other work; a refusal that is faster would end the process.
					sent.catch(() => {});
					return sent;
				}
			}),
			...(settings.oidc ? [oidcProvider(settings.oidc)] : [])
		],
		callbacks: {
			signIn({ account, profile }) {
				if (account?.provider !== 'oidc') return true;
				// Invitations are matched by address: one that nobody has verified would let anyone in.
				return typeof profile?.email === 'string' && profile.email_verified === true;
			}
		},
		logger: {
			error: (error) => (isTheirs(error) ? log.info({ reason: error.name }, 'a sign-in was refused') : log.error({ err: error }, 'signing in failed')),
			warn: (code) => log.warn({ code }, 'Auth.js warns'),
			debug: () => {}
		}
	};
}

function oidcProvider(oidc: NonNullable<Settings['oidc']>): SvelteKitAuthConfig['providers'][number] {
	return {
		id: 'oidc',
		name: oidc.name,
		type: 'oidc',
		issuer: oidc.issuer,
		clientId: oidc.clientId,
		clientSecret: oidc.clientSecret,
		checks: ['pkce', 'state', 'nonce'],
		// What a scope promises stands in the userinfo answer (OpenID Connect Core 1.0, section 5.4); the ID token may leave it out.
		idToken: false,
		// A verified address at the provider is the same person as the address that a team invited.
		allowDangerousEmailAccountLinking: true,
		profile: (claims) => ({ id: String(claims.sub), name: claims.name ?? null, email: String(claims.email ?? '').trim().toLowerCase() || null, image: null }),
		// Nothing is asked of the provider later, so its tokens are not kept.
		account: () => undefined
	};
}

/** Used links and refused addresses are everyday; only our own faults are worth an error in the log. */
const isTheirs = (error: Error) => ['Verification', 'AccessDenied', 'OAuthCallbackError', 'OAuthAccountNotLinked', 'InvalidCheck'].includes(error.name);

/**
 * The event as it would be at the address of ORIGIN. Links in mails and the provider's way back are made from the
 * request's address; a forged `Host` or `X-Forwarded-Host` would otherwise send somebody's link to another server.
 */
function atOrigin(event: RequestEvent, origin: string): RequestEvent {
	const { host, protocol } = new URL(origin);
	const url = new URL(event.url.pathname + event.url.search, origin);
	const headers = new Headers(event.request.headers);
	headers.set('host', host);
	headers.set('x-forwarded-host', host);
	headers.set('x-forwarded-proto', protocol.slice(0, -1));
	const hasBody = event.request.method !== 'GET' && event.request.method !== 'HEAD';
	const request = new Request(url, { method: event.request.method, headers, ...(hasBody ? { body: event.request.body, duplex: 'half' } : {}) });
	return Object.create(event, { request: { value: request }, url: { value: url } }) as RequestEvent;
}

export interface Authentication {
	/** Answers requests below `AUTH_PATH`. */
	answer(event: RequestEvent): Promise<Response>;
	/** Begins a sign-in from the form of the sign-in page; ends in a redirect, or throws `AuthError`. */
	signIn(event: RequestEvent): Promise<void>;
}

let instance: Authentication | null = null;

/** The one Auth.js instance of the process. */
export function authOf(db: Database, settings: Settings): Authentication {
	instance ??= makeAuth(db, settings);
	return instance;
}

export function makeAuth(db: Database, settings: Settings): Authentication {
	const auth = SvelteKitAuth(authConfig(db, settings));
	return {
		answer: async (event) => auth.handle({ event: atOrigin(event, settings.origin), resolve: async () => new Response('There is nothing at this address.', { status: 404 }) }),
		signIn: async (event) => void (await auth.signIn(atOrigin(event, settings.origin)))
	};
}
