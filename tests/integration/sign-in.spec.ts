import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { eq } from 'drizzle-orm';
import { OAuth2Server } from 'oauth2-mock-server';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { startMailCatcher, type MailCatcher } from '../../src/cli/local/mail-catcher';
import { makeAuth, sessionCookieName, type Authentication } from '../../src/lib/server/auth/auth';
import { userOfSession } from '../../src/lib/server/auth/session-user';
import { accounts, authSessions, users, verificationTokens } from '../../src/lib/server/db/schema';
import type { CaughtMail } from '../../src/lib/server/mail/caught';
import { loadSettings, type Settings } from '../../src/lib/server/settings';
import { actions, load } from '../../src/routes/(public)/signin/+page.server';
import { actions as signOut } from '../../src/routes/signout/+page.server';
import { benchHouse } from '../support/bench-house';
import { freshDatabase, type FreshDatabase } from '../support/database';
import { eventOf, keepCookies } from '../support/event';

const ORIGIN = 'http://127.0.0.1:4180';
let database: FreshDatabase;
let mail: MailCatcher;
let provider: OAuth2Server;
let settings: Settings;
let auth: Authentication;
const caught: CaughtMail[] = [];
/** Who stands before the provider, and what it says of the person. */
let claims: Record<string, unknown> = {};

beforeAll(async () => {
	database = await freshDatabase();
	await benchHouse(database.db);
	mail = await startMailCatcher(mkdtempSync(join(tmpdir(), 'nonius-mail-')), (m) => caught.push(m));
	provider = new OAuth2Server();
	await provider.issuer.keys.generate('RS256');
	await provider.start(0, '127.0.0.1');
	provider.service.on('beforeTokenSigning', (token: { payload: Record<string, unknown> }) => void Object.assign(token.payload, { sub: claims.sub }));
	provider.service.on('beforeUserinfo', (answer: { body: Record<string, unknown> | '' }) => void (answer.body = claims));
	settings = loadSettings({
		DATABASE_URL: database.url,
		SMTP_URL: mail.smtpUrl,
		ORIGIN,
		AUTH_SECRET: 'a secret for tests only, long enough for anyone',
		OIDC_ISSUER: provider.issuer.url ?? undefined,
		OIDC_CLIENT_ID: 'nonius-tests',
		OIDC_CLIENT_SECRET: 'nonius-tests',
		NONIUS_DEMO: '1'
	});
	auth = makeAuth(database.db, settings);
});
beforeEach(() => {
	caught.length = 0;
});
afterAll(async () => {
	await provider.stop();
	await mail.stop();
	await database.drop();
});

type Jar = Map<string, string>;
const at = (path: string, more: Partial<Parameters<typeof eventOf>[0]> = {}) => ({ db: database.db, settings, path, ...more });

/** Where a redirect leads that SvelteKit throws. */
async function redirectOf(work: unknown): Promise<string> {
	try {
		const answer = await work;
		throw new Error(`No redirect, but ${JSON.stringify(answer)}`);
	} catch (thrown) {
		if (typeof thrown === 'object' && thrown !== null && 'location' in thrown) return String(thrown.location);
		throw thrown;
	}
}

const askForLink = (email: string, jar: Jar = new Map(), headers: Record<string, string> = {}) =>
	actions.mail(eventOf(at('/signin?/mail', { form: { providerId: 'nodemailer', redirectTo: '/studies/autumn', email }, jar, headers })));

async function follow(link: string, jar: Jar): Promise<Response> {
	const url = new URL(link);
	const answer = await auth.answer(eventOf(at(url.pathname + url.search, { jar })));
	keepCookies(jar, answer);
	return answer;
}

const signedIn = (jar: Jar) => userOfSession(database.db, eventOf(at('/', { jar })).cookies, settings);

describe('a link by mail', () => {
	test('signs in once, leads to the page that was asked for, and is refused the second time in words', async () => {
		const jar: Jar = new Map();
		const onward = await follow(await redirectOf(askForLink('Guest@Elsewhere.example', jar)), jar);
		expect(onward.headers.get('location')).toMatch(/^\/signin\/mail/);
		expect(caught).toHaveLength(1);
		expect(caught[0]).toMatchObject({ to: 'guest@elsewhere.example' });
		expect(caught[0].text).toContain('You get this mail because');
		const first = await follow(caught[0].link as string, jar);
		expect(first.headers.get('location')).toBe(`${ORIGIN}/studies/autumn`);
		expect(await signedIn(jar)).toMatchObject({ email: 'guest@elsewhere.example' });

		const again = await follow(caught[0].link as string, new Map());
		const sent = new URL(again.headers.get('location') as string);
		expect(sent.pathname).toBe('/signin');
		const shown = await load(eventOf(at(sent.pathname + sent.search)));
		expect(shown).toMatchObject({ trouble: expect.stringContaining('used already, or is too old') });
	});

	test('is refused when it is too old', async () => {
		await redirectOf(askForLink('late@elsewhere.example'));
		await database.db.update(verificationTokens).set({ expires: new Date(Date.now() - 1000) }).where(eq(verificationTokens.identifier, 'late@elsewhere.example'));
		const jar: Jar = new Map();
		expect((await follow(caught[0].link as string, jar)).headers.get('location')).toContain('error=Verification');
		expect(await signedIn(jar)).toBeNull();
	});

	test('leads to this server, whatever host a forged request names', async () => {
		await redirectOf(askForLink('victim@elsewhere.example', new Map(), { host: 'evil.example', 'x-forwarded-host': 'evil.example', 'x-forwarded-proto': 'https' }));
		expect(new URL(caught[0].link as string).origin).toBe(ORIGIN);
		expect(caught[0].text).not.toContain('evil.example');
	});

	test.each(['no address', 'a@b@elsewhere.example', '"a@elsewhere.example"@evil.example', 'victim@elsewhere.example,evil@evil.example', 'victim@elsewhere.example\nBcc: evil@evil.example'])(
		'is not sent to %j',
		async (email) => {
			expect(await askForLink(email)).toMatchObject({ status: 400, data: { message: expect.stringContaining('not an e-mail address') } });
			expect(caught).toHaveLength(0);
		}
	);

	test('that the mail server does not take is said so, with the address still in the field', async () => {
		const broken = { ...settings, smtpUrl: 'smtp://127.0.0.1:1' };
		await expect(makeAuth(database.db, broken).signIn(eventOf(at('/signin?/mail', { form: { providerId: 'nodemailer', email: 'a@elsewhere.example' } })))).rejects.toMatchObject({
			type: 'EmailSignInError'
		});
	});
});

describe('an OpenID Connect provider', () => {
	async function throughProvider(jar: Jar): Promise<Response> {
		const asked = await redirectOf(actions.provider(eventOf(at('/signin?/provider', { form: { providerId: 'oidc', redirectTo: '/studies' }, jar }))));
		const back = (await fetch(asked, { redirect: 'manual' })).headers.get('location') as string;
		expect(new URL(back).origin).toBe(ORIGIN);
		return follow(back, jar);
	}

	test('signs in whom it vouches for, and keeps none of its tokens', async () => {
		claims = { sub: 'sam', email: 'Sam@Elsewhere.example', email_verified: true, name: 'Sam' };
		const jar: Jar = new Map();
		expect((await throughProvider(jar)).headers.get('location')).toBe(`${ORIGIN}/studies`);
		expect(await signedIn(jar)).toMatchObject({ email: 'sam@elsewhere.example', name: 'Sam' });
		const [account] = await database.db.select().from(accounts).where(eq(accounts.providerAccountId, 'sam'));
		expect(account).toMatchObject({ provider: 'oidc', access_token: null, refresh_token: null, id_token: null });
	});

	test('and a link by mail lead to the same person', async () => {
		await database.db.insert(users).values({ email: 'both@elsewhere.example' });
		claims = { sub: 'both', email: 'BOTH@elsewhere.example', email_verified: true };
		const jar: Jar = new Map();
		await throughProvider(jar);
		expect(await signedIn(jar)).toMatchObject({ email: 'both@elsewhere.example' });
		expect(await database.db.select().from(users).where(eq(users.email, 'both@elsewhere.example'))).toHaveLength(1);
	});

	test.each([{ email_verified: false }, {}, { email_verified: true, email: undefined }])('that says %j of the address lets nobody in as somebody else', async (said) => {
		claims = { sub: 'intruder', email: 'rt@bramling-bench.example', ...said };
		const jar: Jar = new Map();
		expect((await throughProvider(jar)).headers.get('location')).toContain('/signin?error=AccessDenied');
		expect(await signedIn(jar)).toBeNull();
	});
});

describe('one-click sign-in', () => {
	const click = (more: Partial<Parameters<typeof eventOf>[0]> = {}, jar: Jar = new Map()) => actions.demo(eventOf(at('/signin?/demo', { form: { email: 'demo@bramling.example' }, jar, ...more })));

	beforeAll(async () => {
		const [owner] = await database.db.select().from(users).where(eq(users.email, 'rt@bramling-bench.example'));
		await database.db.update(users).set({ email: 'demo@bramling.example' }).where(eq(users.id, owner.id));
	});

	test('works on this machine', async () => {
		const jar: Jar = new Map();
		expect(await redirectOf(click({}, jar))).toBe('/studies');
		expect(await signedIn(jar)).toMatchObject({ email: 'demo@bramling.example' });
		expect(await load(eventOf(at('/signin')))).toMatchObject({ demo: [{ email: 'demo@bramling.example', role: 'owner' }] });
	});

	test.each([
		['from another machine', { clientAddress: '192.168.0.7' }],
		['under another name', { headers: { host: 'nonius.elsewhere.example' } }],
		['through a proxy', { headers: { 'x-forwarded-for': '203.0.113.5' } }]
	])('is refused %s, and the list is not shown', async (_words, more) => {
		const before = await database.db.select().from(authSessions);
		const jar: Jar = new Map();
		await expect(click(more, jar)).rejects.toMatchObject({ status: 403 });
		expect(jar.size).toBe(0);
		expect(await database.db.select().from(authSessions)).toHaveLength(before.length);
		expect(await load(eventOf(at('/signin', more)))).toMatchObject({ demo: [] });
	});

	test('is refused without demo mode', async () => {
		await expect(click({ settings: { ...settings, demo: false } })).rejects.toMatchObject({ status: 403 });
	});

	test('is refused for everybody else', async () => {
		await expect(click({ form: { email: 'km@bramling-bench.example' } })).rejects.toMatchObject({ status: 403 });
	});
});

describe('a session', () => {
	const opened = async (expires: Date): Promise<Jar> => {
		const [user] = await database.db.select().from(users).where(eq(users.email, 'km@bramling-bench.example'));
		const token = `token-${Math.random()}`;
		await database.db.insert(authSessions).values({ sessionToken: token, userId: user.id, expires });
		return new Map([[sessionCookieName(settings), token]]);
	};

	test('ends when its time is over', async () => {
		expect(await signedIn(await opened(new Date(Date.now() + 60_000)))).not.toBeNull();
		expect(await signedIn(await opened(new Date(Date.now() - 1000)))).toBeNull();
	});

	test('ends by signing out, on the server too', async () => {
		const jar = await opened(new Date(Date.now() + 60_000));
		const token = jar.get(sessionCookieName(settings)) as string;
		expect(await redirectOf(signOut.default(eventOf(at('/signout', { form: {}, jar }))))).toBe('/signin');
		expect(jar.size).toBe(0);
		expect(await database.db.select().from(authSessions).where(eq(authSessions.sessionToken, token))).toEqual([]);
	});
});
