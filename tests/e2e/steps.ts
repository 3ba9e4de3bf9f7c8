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

/**
 * Gives the bench the focus, as the skip link does, once it answers to keys, and holds a wearable: pressing the number
 * of what is held already is answered in words.
 */
export async function focusBench(page: Page, number = 1): Promise<void> {
	await expect(async () => {
		await page.getByRole('application').focus();
		await page.keyboard.press(String(number));
		await expect(page.getByRole('status').filter({ hasText: new RegExp(`^${number} .* is held`) })).toBeVisible({ timeout: 1000 });
	}).toPass({ timeout: 20_000 });
}

/** The held wearable's offset as the rule says it; 0 while there is none. */
export async function offsetOf(page: Page): Promise<number> {
	return Number(await page.getByRole('slider', { name: 'Offset' }).getAttribute('aria-valuenow', { timeout: 2000 }).catch(() => '0'));
}

/** Everything typed has reached the server. */
export async function saved(page: Page): Promise<void> {
	await expect(page.getByRole('banner').getByRole('status')).toHaveText(/^Saved/);
}

/** Opens a box by its key and waits until it takes what is typed, as a person does. */
export async function openBox(page: Page, key: string): Promise<void> {
	await page.keyboard.press(key);
	await expect(page.getByRole('dialog').getByRole('textbox')).toBeFocused();
}
