import { expect, test } from '@playwright/test';
import { mailTo, origin, signInAs } from './steps';

test('a link by mail signs in once, and only once', async ({ page }) => {
	await page.goto(`${origin()}/signin`);
	await page.getByLabel('E-mail address').fill('visitor@elsewhere.example');
	await page.getByRole('button', { name: 'Send a sign-in link' }).click();
	await expect(page.getByRole('heading', { name: 'Look into your mail' })).toBeVisible();
	const mail = await mailTo('visitor@elsewhere.example');
	expect(mail.text).toContain('You get this mail because');
	await page.goto(mail.link as string);
	await expect(page.getByRole('heading', { name: 'Teams' })).toBeVisible();
	await page.context().clearCookies();
	await page.goto(mail.link as string);
	await expect(page.getByRole('alert')).toContainText('used already, or is too old');
});

test('an OpenID Connect provider signs in, and a first person makes a team', async ({ page }) => {
	await page.goto(`${origin()}/signin`);
	await page.getByRole('button', { name: 'Sign in with Bramling identity' }).click();
	await expect(page.getByRole('heading', { name: 'Teams', exact: true })).toBeVisible();
	await page.getByLabel('Name of the team').fill('Second Bench');
	await page.getByLabel('Your initials').fill('SA');
	await page.getByRole('button', { name: 'Make the team' }).click();
	await expect(page.getByRole('heading', { name: 'Studies' })).toBeVisible();
	// Another team's study is not there for this one, by page and by address.
	await page.goto(`${origin()}/studies/autumn-trail-study`);
	await expect(page.getByRole('heading', { name: 'Nothing here' })).toBeVisible();
	expect((await page.request.get(`${origin()}/api/v1/studies/autumn-trail-study/pairs.csv`)).status()).toBe(404);
});

test('who is signed out is led to sign in; the API says so in its own way', async ({ page }) => {
	await page.goto(`${origin()}/studies/autumn-trail-study`);
	await expect(page).toHaveURL(/\/signin/);
	const answer = await page.request.get(`${origin()}/api/v1/studies/autumn-trail-study/pairs.csv`);
	expect(answer.status()).toBe(401);
	expect(answer.headers()['content-type']).toBe('application/problem+json');
});

test('what a role may not do is refused by the server, not only hidden', async ({ page }) => {
	await signInAs(page, 'LV');
	await page.goto(`${origin()}/studies/autumn-trail-study`);
	await expect(page.getByRole('link', { name: 'Import' })).toHaveCount(0);
	const upload = await page.request.post(`${origin()}/api/v1/studies/autumn-trail-study/uploads`, {
		headers: { origin: origin() },
		multipart: { file: { name: 'a.csv', mimeType: 'text/csv', buffer: Buffer.from('time,hr\n1,2\n') } }
	});
	expect(upload.status()).toBe(403);
	expect((await page.request.get(`${origin()}/api/v1/studies/autumn-trail-study/pairs.csv`)).status()).toBe(403);
	await page.goto(`${origin()}/studies/new`);
	await expect(page.getByRole('heading', { name: 'Not for your role' })).toBeVisible();
});

test('a contributor sees own sessions only', async ({ page }) => {
	await signInAs(page, 'JA');
	await page.goto(`${origin()}/studies/autumn-trail-study`);
	const who = await page.getByRole('row').filter({ has: page.getByRole('rowheader') }).getByText(/^P\d+$/).allInnerTexts();
	expect(who.length).toBeGreaterThan(0);
	expect(new Set(who)).toEqual(new Set(['P08']));
});

test('signing out closes the way back', async ({ page }) => {
	await signInAs(page, 'SO');
	await page.getByRole('button', { name: /SO|reviewer/ }).first().click();
	await page.getByRole('button', { name: 'Sign out' }).click();
	await expect(page).toHaveURL(/\/signin/);
	await page.goto(`${origin()}/studies`);
	await expect(page).toHaveURL(/\/signin/);
});
