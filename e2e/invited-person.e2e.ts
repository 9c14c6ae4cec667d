import { type Browser, expect, type Page, test } from 'playwright/test';
import { faultsOf, signIn } from './session.ts';

const first = 'north river 31 crane barrow';
const second = 'quiet lantern under 7 gables';

async function fresh(browser: Browser, width: number, height: number): Promise<{ page: Page; faults: () => string[] }> {
	const context = await browser.newContext({ viewport: { width, height } });
	const page = await context.newPage();
	return { page, faults: faultsOf(page) };
}

/** Opens the newest mail to the address whose subject has these words, and follows its link. */
async function followMail(page: Page, email: string, subject: RegExp, link: RegExp): Promise<void> {
	await page.goto('/mailbox');
	const mail = page.getByRole('button', { name: subject }).filter({ hasText: email }).first();
	await mail.click();
	await page.getByRole('link', { name: link }).first().click();
}

test('a new person is invited, comes in on a phone, and gets a new password on a tablet', async ({ page, browser }) => {
	const stamp = Date.now().toString(36);
	const email = `nora.${stamp}@oster.example`;
	const name = `Nora ${stamp}`;
	const faults = faultsOf(page);
	await signIn(page, 'project-engineer');
	await page.getByRole('link', { name: /Marrowby/ }).click();
	await page.getByRole('link', { name: /^People/ }).click();
	await page.getByRole('button', { name: 'Invite', exact: true }).click();
	await page.getByLabel('E-mail address').fill(email);
	await page.getByLabel('Role on this site').selectOption('contractor');
	await page.getByLabel('Company', { exact: true }).selectOption({ label: 'Oster Steel' });
	await page.getByRole('button', { name: 'Send the invitation' }).click();
	await expect(page.getByRole('region', { name: 'Invited' }).getByText(email, { exact: true })).toBeVisible();

	const phone = await fresh(browser, 360, 780);
	await followMail(phone.page, email, /invites you/, /invitation#/);
	await expect(phone.page.getByRole('heading', { name: /Ida Roen invites you to Marrowby pump house/ })).toBeVisible();
	await phone.page.getByLabel('Your name').fill(name);
	await phone.page.getByLabel('A password').fill('password1234');
	await phone.page.getByRole('button', { name: 'Accept and go in' }).click();
	await expect(phone.page.getByText('among the first that anybody would try')).toBeVisible();
	await phone.page.getByLabel('A password').fill(first);
	await phone.page.getByRole('button', { name: 'Accept and go in' }).click();
	await expect(phone.page.getByRole('heading', { name: 'May we pour?' })).toBeVisible();
	// Another firm's people are not hers to see.
	await phone.page.goto(`${phone.page.url()}/people`);
	await expect(phone.page.getByText('(you)')).toBeVisible();
	await expect(phone.page.getByText('Lena Fennick')).toHaveCount(0);

	const tablet = await fresh(browser, 820, 1180);
	await tablet.page.goto('/sign-in');
	await tablet.page.getByRole('link', { name: /Forgot/ }).click();
	await expect(tablet.page.getByRole('heading', { name: 'A link to a new password' })).toBeVisible();
	await tablet.page.getByLabel('E-mail').fill(email);
	await tablet.page.getByRole('button', { name: 'Send the link' }).click();
	await expect(tablet.page.getByText('Look into your mail')).toBeVisible();
	await followMail(tablet.page, email, /new password/i, /reset#/);
	await tablet.page.getByLabel('New password').fill(second);
	await tablet.page.getByRole('button', { name: 'Set the password' }).click();
	await tablet.page.getByRole('link', { name: 'Sign in with it.' }).click();
	await expect(tablet.page.getByRole('button', { name: 'Sign in' })).toBeVisible();
	await tablet.page.getByLabel('E-mail').fill(email);
	await tablet.page.getByLabel('Password').fill(second);
	await tablet.page.getByRole('button', { name: 'Sign in' }).click();
	await expect(tablet.page.getByRole('heading', { name: /You are on 1 site/ })).toBeVisible();
	// The phone was signed out by it.
	await phone.page.goto('/sites');
	await expect(phone.page).toHaveURL(/\/sign-in/);

	await page.reload();
	await page.getByRole('button', { name: `End role of ${name}` }).click();
	await page.getByRole('button', { name: 'End the role', exact: true }).click();
	await expect(page.getByRole('main').getByText(email, { exact: true })).toHaveCount(0);
	await tablet.page.goto('/sites');
	await expect(tablet.page.getByRole('heading', { name: 'You are on no site yet' })).toBeVisible();
	expect([...faults(), ...phone.faults(), ...tablet.faults()]).toEqual([]);
	await phone.page.context().close();
	await tablet.page.context().close();
});
