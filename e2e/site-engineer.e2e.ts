import { readFileSync } from 'node:fs';
import { expect, test } from 'playwright/test';
import { faultsOf, signIn } from './session.ts';

/** The road from an IFC file and two point lists to one deviation, on a site of one's own. */
test('upload model, control and survey, fit both set-ups, check, and see one deviation', async ({ page }) => {
	const faults = faultsOf(page);
	await signIn(page, 'site-engineer');

	await page.goto('/sites');
	await page.getByRole('button', { name: 'Found a site' }).click();
	await page.getByLabel('Name', { exact: false }).first().fill('Journey yard');
	await page.getByRole('button', { name: /found/i }).last().click();
	await page.waitForURL(/\/sites\/[0-9a-f-]{36}$/);
	const site = new URL(page.url()).pathname;

	// Something else under an IFC's name is refused in words, and nothing of it stays.
	await page.goto(`${site}/model`);
	await page.setInputFiles('input[type=file]', {
		name: 'drawing.ifc',
		mimeType: 'text/plain',
		buffer: Buffer.from('%PDF-1.7 not a model'),
	});
	await page.getByRole('button', { name: 'Send and read' }).click();
	await expect(page.getByText(/was not read|is not an IFC/i).first()).toBeVisible();

	await page.setInputFiles('input[type=file]', 'fixtures/demo/pump-house.ifc');
	await page.getByText('a model of its own').click();
	await page.getByLabel('Name of the model').fill('Pump house');
	await page.getByRole('button', { name: 'Send and read' }).click();
	await expect(page.getByRole('link', { name: 'Revision 1, newest' })).toBeVisible({ timeout: 60_000 });
	await page.getByRole('link', { name: 'Revision 1, newest' }).click();
	await expect(page.getByRole('heading', { level: 1 })).toContainText('element');

	// A bad row is named, and nothing is stored before it is put right.
	await page.goto(`${site}/control`);
	const control = readFileSync('fixtures/demo/control-design.csv', 'utf8');
	const bad = control.replace(/^(C3,)[^,]+/m, '$1N/A');
	expect(bad).not.toBe(control);
	await page.setInputFiles('input[type=file]', { name: 'control.csv', mimeType: 'text/csv', buffer: Buffer.from(bad) });
	await page.getByRole('radio', { name: 'metres', exact: true }).check();
	await expect(page.getByText(/Row \d+: easting 'N\/A' is not a number\./)).toBeVisible();
	await expect(page.getByRole('button', { name: /Store \d+ control points/ })).toHaveCount(0);
	await page.setInputFiles('input[type=file]', { name: 'control.csv', mimeType: 'text/csv', buffer: Buffer.from(control) });
	await page.getByRole('radio', { name: 'metres', exact: true }).check();
	await page.getByRole('button', { name: /Store \d+ control points/ }).click();
	await expect(page.getByRole('heading', { level: 1 })).toContainText('are known in the design');

	await page.goto(`${site}/surveys`);
	await page.setInputFiles('input[type=file]', 'fixtures/demo/survey-1.csv');
	await page.getByRole('radio', { name: 'metres', exact: true }).check();
	await page.getByLabel('Observer').fill('A. Invented');
	await page.getByRole('textbox', { name: 'Instrument' }).fill('total station');
	await page.getByLabel('Its serial number').fill('000 123');
	for (const common of await page.getByLabel('Common part').all()) await common.fill('0.5');
	await page.getByRole('button', { name: /^Store .* points$/ }).click();
	await page.waitForURL(/\/surveys\/[0-9a-f-]{36}$/);
	await expect(page.getByRole('heading', { level: 1 })).toContainText('cannot be checked whole yet');

	for (const setup of ['S1', 'S2']) {
		await page
			.getByRole('listitem')
			.filter({ hasText: `Set-up ${setup}` })
			.getByRole('link', { name: 'Fit it' })
			.click();
		await expect(page.getByRole('heading', { level: 1 })).toContainText(`Set-up ${setup} fits`);
		await page.getByRole('button', { name: 'Adopt this fit' }).click();
		const dialog = page.getByRole('dialog');
		await dialog.getByLabel('Reason').fill('Residuals agree with the instrument’s σ');
		await dialog.getByRole('button', { name: 'Adopt this fit' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toContainText('is tied to the design');
		await page.goBack();
	}
	await expect(page.getByRole('heading', { level: 1 })).toContainText('is tied to the design');

	await page.getByRole('link', { name: 'Check this survey' }).click();
	await page.getByRole('button', { name: 'Check now' }).last().click();
	await page.waitForURL(/\/checks\/[0-9a-f-]{36}/);
	await expect(page.getByRole('heading', { level: 1 })).toContainText(/off|too close|not seen/, { timeout: 60_000 });

	// Chosen in the table: in the address, in the card, as a whole sentence.
	const row = page.locator('tr', { hasText: /outside, by/ }).first();
	await row.click();
	await expect(page).toHaveURL(/[?&]at=/);
	await expect(page.getByText(/Allowed .+ Known to ±.+Outside, by/).first()).toBeVisible();
	const chosen = page.url();

	// The same link shows a colleague the same.
	await page.goto('/sites');
	await page.goto(chosen);
	await expect(page.getByText(/Allowed .+ Known to ±.+Outside, by/).first()).toBeVisible();

	const download = page.waitForEvent('download');
	await page.getByRole('button', { name: /CSV/ }).first().click();
	expect(readFileSync(await (await download).path(), 'utf8')).toContain('deviation');
	expect(faults()).toEqual([]);
});
