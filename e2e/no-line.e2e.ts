import { type Browser, expect, test } from 'playwright/test';
import { faultsOf, signIn } from './session.ts';

const photo = Buffer.from('iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mNkYPhfDwAChwGA60e6kgAAAABJRU5ErkJggg==', 'base64');

/** The demo's trial, so that there is a flag to answer. */
async function publishCheck(browser: Browser): Promise<void> {
	const context = await browser.newContext();
	const page = await context.newPage();
	await signIn(page, 'site-engineer');
	await page.getByRole('link', { name: /Marrowby/ }).click();
	await page.getByRole('link', { name: /^Check/ }).click();
	await page.getByRole('button', { name: /^Publish/ }).click();
	await page
		.getByRole('dialog')
		.getByRole('button', { name: /^Publish/ })
		.click();
	await expect(page.getByRole('dialog')).toHaveCount(0);
	await context.close();
}

test('a contractor answers a flag on a phone without a line; it is sent once the line is back', async ({ browser }) => {
	const context = await browser.newContext({ viewport: { width: 360, height: 780 }, hasTouch: true, isMobile: true });
	const page = await context.newPage();
	const faults = faultsOf(page);
	await signIn(page, 'contractor');
	await page.getByRole('link', { name: /Marrowby/ }).click();
	await page.waitForURL(/\/sites\/[0-9a-f-]{36}/);
	await page.goto(`${new URL(page.url()).pathname}/flags`);
	await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
	const open = page.getByRole('button', { name: /^to answer/ });
	if ((await open.count()) === 0) {
		await publishCheck(browser);
		await page.reload();
	}
	await open.click();
	await expect(page).toHaveURL(/show=/);
	await page.goto((await page.locator('tbody a').first().getAttribute('href')) ?? '');
	await expect(page.getByRole('group', { name: 'Your answer' })).toBeVisible();
	for (const name of ['Send answer', 'Camera']) {
		const box = await page.getByText(name, { exact: true }).first().boundingBox();
		expect(box?.height).toBeGreaterThanOrEqual(20);
		expect(box?.y).toBeGreaterThan(640);
	}

	await context.setOffline(true);
	await page.getByText('We ask to leave it').click();
	await page.getByRole('textbox', { name: 'Why it does no harm' }).fill('The cladding has 40 mm of play.');
	await page.getByRole('button', { name: 'Send answer' }).click();
	await expect(page.getByText(/No line\. 1 answer waits on this phone \(\d\d:\d\d\)/)).toBeVisible();
	await page.locator('input[type=file][capture]').setInputFiles({ name: 'IMG_1.png', mimeType: 'image/png', buffer: photo });
	await expect(page.getByText(/No line\. 1 answer and 1 photo wait on this phone/)).toBeVisible();
	await context.setOffline(false);
	await expect(page.getByText(/No line\./)).toHaveCount(0, { timeout: 45_000 });
	await expect(page.getByRole('button', { name: 'Change answer' })).toBeVisible();
	await expect(page.getByText('Asks for a concession', { exact: true })).toBeVisible();
	await expect(page.getByRole('img', { name: /^By / })).toBeVisible();
	await page.getByRole('button', { name: 'Take back' }).click();
	await expect(page.getByRole('button', { name: 'Send answer' })).toBeVisible();
	expect(faults().filter((one) => !/ERR_INTERNET_DISCONNECTED/.test(one))).toEqual([]);
	await context.close();
});
