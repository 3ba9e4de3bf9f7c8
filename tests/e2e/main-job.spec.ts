/**
 * The main job in one sitting: files in, clocks aligned, stretches tagged by keyboard, a teammate's approval, the
 * figures, the pairs on disk, and the pairs computed again here by plain formulas of our own.
 */
import { readFileSync, existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import AxeBuilder from '@axe-core/playwright';
import { expect, test, type Page } from '@playwright/test';
import { focusBench, offsetOf, openBox, origin, saved, signInAs } from './steps';

const STUDY = 'autumn-trail-study';
const SAMPLE = join(import.meta.dirname, '../../fixtures/sample-session');

interface PairRow {
	device: string;
	reference: number;
	wearable: number;
	primary: boolean;
	cleaned: boolean;
	tags: string;
	offsetS: number;
	state: string;
}

/** Reads exported pairs with nothing but string splitting: no code of the application. */
function readPairs(text: string): PairRow[] {
	const [head, ...lines] = text.trim().split('\r\n');
	const columns = head.split(',');
	return lines.map((line) => {
		const cells = Object.fromEntries(line.split(',').map((cell, i) => [columns[i], cell]));
		return {
			device: cells.device, reference: Number(cells.reference), wearable: Number(cells.wearable), primary: cells.in_primary === '1', cleaned: cells.in_cleaned === '1',
			tags: cells.wearable_tags, offsetS: Number(cells.offset_s), state: cells.state
		};
	});
}

/** Bias, mean absolute error and share within 5 bpm by their definitions. */
function plainFigures(rows: PairRow[]) {
	const d = rows.map((r) => r.wearable - r.reference);
	return {
		n: d.length,
		bias: d.reduce((a, b) => a + b, 0) / d.length,
		mae: d.reduce((a, b) => a + Math.abs(b), 0) / d.length,
		within5: d.filter((x) => Math.abs(x) <= 5).length / d.length
	};
}

const fixed = (v: number, decimals: number) => {
	const text = Math.abs(v).toFixed(decimals);
	return v < 0 && Number(text) !== 0 ? `−${text}` : text;
};
const signed = (v: number, decimals: number) => (v > 0 && Number(Math.abs(v).toFixed(decimals)) !== 0 ? `+${fixed(v, decimals)}` : fixed(v, decimals));

/** The figures of a device's row in the session's agreement table. */
async function shownFigure(page: Page, row: string, column: number): Promise<string> {
	return (await page.getByRole('complementary', { name: 'Agreement and tags' }).getByRole('row', { name: new RegExp(`^${row}`) }).getByRole('cell').nth(column).innerText()).trim();
}

async function importFiles(page: Page, study: string, files: string[]): Promise<void> {
	await page.goto(`${origin()}/studies/${study}/import`);
	await expect(page.getByRole('heading', { name: 'Files from the bench' })).toBeVisible();
	await page.getByLabel('Choose files', { exact: true }).setInputFiles(files);
}

test('from files on disk to reviewed figures and exported pairs, by keyboard', async ({ page, browser }) => {
	test.setTimeout(240_000);
	await signInAs(page, 'RT');

	await test.step('drop the files of one session', async () => {
		await importFiles(page, STUDY, readdirSync(SAMPLE).filter((f) => !f.endsWith('.md')).map((f) => join(SAMPLE, f)));
		await expect(page.getByText('halden_1120_0715.fit')).toBeVisible({ timeout: 30_000 });
		await expect(page.getByText('wrenna-p03-hill-1120.tcx')).toBeVisible();
		await expect(page.getByText('ostrel-p03-hill-1120.csv')).toBeVisible();
		await expect(page.getByRole('link', { name: 'S25' })).toBeVisible({ timeout: 30_000 });
	});

	await test.step('open the session: the clocks are proposed', async () => {
		// The search runs beside the import: looked at again until it has answered.
		await expect
			.poll(
				async () => {
					await page.goto(`${origin()}/studies/${STUDY}/sessions/S25`);
					await expect(page.getByRole('application')).toBeVisible();
					return offsetOf(page);
				},
				{ timeout: 40_000 }
			)
			.not.toBe(0);
		await expect(page.getByRole('application')).toBeVisible();
	});

	await test.step('align by keyboard: nudge away, put at the peak, lock', async () => {
		await focusBench(page, 1);
		const proposed = await offsetOf(page);
		await page.keyboard.press('Shift+.');
		await page.keyboard.press('.');
		await expect.poll(() => offsetOf(page)).toBeCloseTo(proposed + 1.1, 1);
		await page.keyboard.press('Control+z');
		await page.keyboard.press('Control+z');
		await page.keyboard.press('p');
		await expect.poll(() => offsetOf(page)).toBeCloseTo(proposed, 1);
		await page.keyboard.press('l');
		await page.keyboard.press('.');
		await expect(page.getByText(/locked/i).first()).toBeVisible();
		await page.keyboard.press('2');
		await page.keyboard.press('p');
		await saved(page);
	});

	await test.step('tag a stretch by keyboard, take it back, make it again, note it', async () => {
		await page.keyboard.press('1');
		await page.keyboard.press('Home');
		for (let i = 0; i < 30; i++) await page.keyboard.press('Shift+ArrowRight');
		await page.keyboard.press('e');
		for (let i = 0; i < 6; i++) await page.keyboard.press('Shift+ArrowRight');
		await page.keyboard.press('e');
		await page.keyboard.press('m');
		const tags = page.getByRole('listbox', { name: /^Tags/ });
		await expect(tags.getByRole('option', { name: /Motion artefact/ })).toHaveCount(1);
		await page.keyboard.press('Control+z');
		await expect(page.getByRole('option', { name: /Motion artefact/ })).toHaveCount(0);
		await page.keyboard.press('Control+Shift+z');
		await expect(page.getByRole('option', { name: /Motion artefact/ })).toHaveCount(1);
		await page.getByRole('option', { name: /Motion artefact/ }).click();
		await focusBench(page);
		await openBox(page, 'j');
		await page.keyboard.type('Shook the wrist here');
		await page.keyboard.press('Enter');
		await saved(page);
		await expect(page.getByText('Shook the wrist here')).toBeVisible();
	});

	await test.step('nothing is lost by a reload', async () => {
		await page.reload();
		await expect(page.getByRole('option', { name: /Motion artefact/ })).toHaveCount(1);
	});

	await test.step('the page has nothing that axe minds', async () => {
		const found = await new AxeBuilder({ page }).analyze();
		expect(found.violations.map((v) => `${v.id}: ${v.nodes.map((n) => n.target).join(' ')}`)).toEqual([]);
	});

	await test.step('hand to review', async () => {
		await focusBench(page);
		await openBox(page, 'Shift+Enter');
		await page.keyboard.type('Please look at the shaking');
		await page.keyboard.press('Enter');
		await expect(page.getByText('In review').first()).toBeVisible();
	});

	await test.step('nobody reviews own work', async () => {
		await focusBench(page);
		await page.keyboard.press('v');
		await expect(page.getByRole('dialog')).toHaveCount(0);
	});

	await test.step('the teammate hands it back, then vouches', async () => {
		const context = await browser.newContext({ viewport: { width: 1440, height: 900 } });
		const teammate = await context.newPage();
		await signInAs(teammate, 'SO');
		await teammate.goto(`${origin()}/studies/${STUDY}/review`);
		await expect(teammate.getByText('S25').first()).toBeVisible();
		await teammate.goto(`${origin()}/studies/${STUDY}/sessions/S25`);
		await expect(teammate.getByText('Please look at the shaking')).toBeVisible();
		await focusBench(teammate);
		await openBox(teammate, 'Shift+V');
		await teammate.keyboard.type('Is the end of the tag right?');
		await teammate.keyboard.press('Enter');
		await expect(teammate.getByText('Handed back').first()).toBeVisible();

		await page.reload();
		await expect(page.getByText('Is the end of the tag right?')).toBeVisible();
		await focusBench(page);
		await openBox(page, 'Shift+Enter');
		await page.keyboard.press('Enter');
		await expect(page.getByText('In review').first()).toBeVisible();

		await teammate.reload();
		await focusBench(teammate);
		await openBox(teammate, 'v');
		await teammate.keyboard.press('Enter');
		await expect(teammate.getByText('Reviewed').first()).toBeVisible();
		await context.close();
	});

	await test.step('the exported pairs give the figures of the page', async () => {
		await page.reload();
		const response = await page.request.get(`${origin()}/api/v1/studies/${STUDY}/pairs.csv?session=S25`);
		expect(response.status()).toBe(200);
		const rows = readPairs(await response.text());
		expect(new Set(rows.map((r) => r.device))).toEqual(new Set(['Wrenna Loop 2', 'Ostrel Band']));
		expect(rows.every((r) => r.state === 'reviewed')).toBe(true);
		const wrenna = rows.filter((r) => r.device === 'Wrenna Loop 2');
		expect(wrenna.filter((r) => r.tags.includes('motion-artefact')).length).toBeGreaterThan(50);
		expect(wrenna.every((r) => !r.tags.includes('motion-artefact') || !r.cleaned)).toBe(true);

		const primary = plainFigures(wrenna.filter((r) => r.primary));
		expect(await shownFigure(page, 'Bias', 0)).toBe(signed(primary.bias, 1));
		expect(await shownFigure(page, 'Mean abs. error bpm', 0)).toBe(fixed(primary.mae, 1));
		expect(await shownFigure(page, 'Within ±5', 0)).toBe((primary.within5 * 100).toFixed(1));
		await page.getByRole('button', { name: 'Cleaned' }).click();
		const cleaned = plainFigures(wrenna.filter((r) => r.cleaned));
		expect(await shownFigure(page, 'Bias', 0)).toBe(signed(cleaned.bias, 1));
		expect(cleaned.n).toBeLessThan(primary.n);
	});

	await test.step('study figures and the archive with the dictionary', async () => {
		await page.goto(`${origin()}/studies/${STUDY}/agreement`);
		await expect(page.getByRole('heading', { name: 'Wrenna Loop 2' })).toBeVisible();
		const all = readPairs(await (await page.request.get(`${origin()}/api/v1/studies/${STUDY}/pairs.csv`)).text()).filter((r) => r.device === 'Wrenna Loop 2' && r.primary);
		const figures = plainFigures(all);
		await expect(page.getByRole('row', { name: /^Bias, bpm/ }).getByRole('cell').first()).toContainText(signed(figures.bias, 1));
		await expect(page.getByRole('row', { name: /^Pairs/ }).getByRole('cell').first()).toHaveText(figures.n.toLocaleString('en-GB'));
		const [download] = await Promise.all([page.waitForEvent('download'), page.getByRole('link', { name: 'Pairs and dictionary' }).click()]);
		expect(download.suggestedFilename()).toBe(`${STUDY}-pairs.zip`);
		const dictionary = await (await page.request.get(`${origin()}/api/v1/studies/${STUDY}/pairs-dictionary.csv`)).text();
		for (const column of ['session', 'participant', 'device', 'activity', 'time', 'reference', 'wearable', 'offset_s', 'wearable_tags', 'in_primary', 'in_cleaned']) expect(dictionary).toContain(`column,${column},`);
	});
});

const REAL = join(import.meta.dirname, '../../../shared/files');
const STRAP = join(REAL, 'fit-triathlon-summary-first.fit');

test('the same journey with a real recording: a strap and a watch of one session', async ({ page }) => {
	test.skip(!existsSync(STRAP), 'The real recordings are not beside this checkout.');
	test.setTimeout(180_000);
	await signInAs(page, 'KM');
	await page.goto(`${origin()}/studies/new`);
	await page.getByLabel('Title').fill('Real recordings');
	await page.getByLabel('Activities, one a line').fill('Triathlon');
	await page.getByLabel('Name of the reference', { exact: true }).fill('Strap of the day');
	await page.getByLabel('Name of wearable 1', { exact: true }).fill('Watch of the day');
	await page.getByRole('button', { name: 'Make the study' }).click();
	await expect(page.getByRole('heading', { name: 'Files from the bench' })).toBeVisible();

	// The watch: the same heart with a clock 7 s ahead and a slower answer, written as a table.
	const strap = readFileSync(STRAP);
	const { readFile } = await import('../../src/lib/formats');
	const reading = readFile(new Uint8Array(strap), 'strap.fit');
	if (!reading.ok) throw new Error(reading.refusal.message);
	const heart = reading.recording.traces.find((t) => t.kind === 'heartRate')!;
	let smooth = heart.value[0];
	const watch = ['time,heart rate', ...Array.from(heart.tS, (t, i) => {
		smooth += (heart.value[i] - smooth) / 3;
		return `${new Date((t + 7) * 1000).toISOString()},${Math.round(smooth)}`;
	})].join('\n');
	await page.getByLabel('Choose files', { exact: true }).setInputFiles([
		{ name: 'strap.fit', mimeType: 'application/octet-stream', buffer: strap },
		{ name: 'watch-of-the-day.csv', mimeType: 'text/csv', buffer: Buffer.from(watch) }
	]);
	for (const [file, device] of [['strap.fit', /Strap/], ['watch-of-the-day.csv', /Watch/]] as const) {
		const question = page.getByRole('listitem').filter({ hasText: file }).getByRole('button', { name: device });
		await expect(question.or(page.getByRole('link', { name: 'S01' }))).toBeVisible({ timeout: 30_000 });
		if (await question.isVisible()) await question.click();
	}
	await expect(page.getByRole('link', { name: 'S01' })).toBeVisible({ timeout: 30_000 });
	await expect
		.poll(
			async () => {
				await page.goto(`${origin()}/studies/real-recordings/sessions/S01`);
				await expect(page.getByRole('application')).toBeVisible();
				await page.waitForTimeout(500);
				return offsetOf(page);
			},
			{ timeout: 40_000 }
		)
		.toBeLessThan(-6);
	const offsetS = await offsetOf(page);
	expect(offsetS).toBeGreaterThan(-12);
	await focusBench(page);
	await page.keyboard.press('l');
	await saved(page);
	const rows = readPairs(await (await page.request.get(`${origin()}/api/v1/studies/real-recordings/pairs.csv?include=aligned`)).text());
	expect(rows.length).toBeGreaterThan(2500);
	expect(plainFigures(rows).mae).toBeLessThan(4);
});
