/** Steps that several journeys take. Everything is found by role and name, as a user finds it. */
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, type Page } from '@playwright/test';
import type { CaughtMail } from '../../src/lib/server/mail/caught';

export const origin = (): string => process.env.NONIUS_E2E_ORIGIN ?? '';

const ROLE = { RT: 'owner', KM: 'analyst', SO: 'reviewer', JA: 'contributor', LV: 'reader' } as const;

/** One click on the sign-in page. */
export async function signInAs(page: Page, initials: keyof typeof ROLE): Promise<void> {
	await page.context().clearCookies();
	await page.goto(`${origin()}/signin`);
	await page.getByRole('button', { name: new RegExp(`^Sign in as .*, ${ROLE[initials]}$`) }).click();
	await expect(page).toHaveURL(/\/studies$/);
}

/** The newest mail to an address, waited for. */
export async function mailTo(address: string): Promise<CaughtMail> {
	const folder = join(process.env.NONIUS_E2E_DATA ?? '', 'mail');
	let found: CaughtMail | undefined;
	await expect
		.poll(() => {
			const mails = readdirSync(folder).sort().map((name) => JSON.parse(readFileSync(join(folder, name), 'utf8')) as CaughtMail);
			found = mails.filter((m) => m.to === address).at(-1);
			return found !== undefined;
		})
		.toBe(true);
	return found as CaughtMail;
}

/** Gives the bench the focus, as the skip link does. */
export const focusBench = (page: Page) => page.getByRole('application').focus();

/** Everything typed has reached the server. */
export async function saved(page: Page): Promise<void> {
	await expect(page.getByRole('banner').getByRole('status')).toHaveText(/^Saved/);
}
