import { Secret, TOTP } from 'otpauth';
import { expect, type Page, test } from 'playwright/test';
import { demoEmail, demoPassword, faultsOf, signIn } from './session.ts';

/** The code an app shows now, so many half minutes on. */
const codeOf = (secret: string, steps = 0) =>
	new TOTP({ secret: Secret.fromBase32(secret) }).generate({ timestamp: Date.now() + steps * 30_000 });

async function provePassword(page: Page): Promise<void> {
	const dialog = page.getByRole('dialog');
	await dialog.getByLabel('Your password').fill(demoPassword);
	await dialog.getByRole('button', { name: 'It is me' }).click();
}

for (const { name, width, height } of [
	{ name: 'a phone', width: 360, height: 780 },
	{ name: 'a laptop', width: 1280, height: 800 },
]) {
	test(`codes of an app are set up, asked and removed on ${name}`, async ({ page }) => {
		await page.setViewportSize({ width, height });
		const faults = faultsOf(page);
		await signIn(page, 'observer');
		await page.goto('/account');
		await page.getByRole('button', { name: 'Set up codes' }).click();
		await provePassword(page);
		await expect(page.getByAltText(/for the camera of an app/)).toBeVisible();
		const secret = ((await page.getByTestId('totp-secret').textContent()) ?? '').replaceAll(/\s/g, '');
		// A step back: the code of the moment stays unused for the sign-in.
		await page.getByLabel('The code it shows now').fill(codeOf(secret, -1));
		await page.getByRole('button', { name: 'Set it up' }).click();
		const recovery = page.getByRole('region', { name: 'Recovery codes' });
		await expect(recovery.getByRole('listitem')).toHaveCount(10);
		const spare = (await recovery.getByRole('listitem').first().textContent()) ?? '';
		await recovery.getByRole('button', { name: 'I have kept them' }).click();

		await page.context().clearCookies();
		await page.goto('/sign-in');
		await page.getByLabel('E-mail').fill(demoEmail.observer);
		await page.getByLabel('Password').fill(demoPassword);
		await page.getByRole('button', { name: 'Sign in' }).click();
		await page.getByLabel('The code of your app').fill('000000');
		await page.getByRole('button', { name: 'Sign in' }).click();
		await expect(page.getByText('This code does not hold')).toBeVisible();
		await page.getByLabel('The code of your app').fill(codeOf(secret));
		await page.getByRole('button', { name: 'Sign in' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toContainText('You are on');

		await page.goto('/account');
		await page.getByRole('button', { name: 'Remove codes' }).click();
		await page.getByRole('dialog').getByLabel('The code of your app').fill(spare);
		await page.getByRole('dialog').getByRole('button', { name: 'It is me' }).click();
		await expect(page.getByRole('button', { name: 'Set up codes' })).toBeVisible();
		expect(faults()).toEqual([]);
	});

	test(`a passkey is added, opens the door, and is removed on ${name}`, async ({ page, baseURL }) => {
		await page.setViewportSize({ width, height });
		const faults = faultsOf(page);
		const devTools = await page.context().newCDPSession(page);
		await devTools.send('WebAuthn.enable');
		await devTools.send('WebAuthn.addVirtualAuthenticator', {
			options: { protocol: 'ctap2', transport: 'internal', hasResidentKey: true, hasUserVerification: true, isUserVerified: true },
		});
		// Passkeys are bound to a name; of this machine's addresses only this one has one.
		const base = new URL(baseURL ?? '');
		base.hostname = 'localhost';
		const at = (path: string) => new URL(path, base).href;
		await page.goto(at('/sign-in'));
		await page.getByLabel('E-mail').fill(demoEmail.observer);
		await page.getByLabel('Password').fill(demoPassword);
		await page.getByRole('button', { name: 'Sign in' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toContainText('You are on');
		await page.goto(at('/account'));
		await page.getByRole('button', { name: 'Add a passkey' }).click();
		await provePassword(page);
		await expect(page.getByText('not used yet')).toBeVisible();

		await page.context().clearCookies();
		await page.goto(at('/sign-in'));
		await page.getByRole('button', { name: 'With a passkey' }).click();
		await expect(page.getByRole('heading', { level: 1 })).toContainText('You are on');
		await page.goto(at('/account'));
		await expect(page.getByText('last used')).toBeVisible();
		await page.getByRole('button', { name: 'Remove', exact: true }).click();
		await page.getByRole('dialog').getByRole('button', { name: 'With a passkey' }).click();
		await expect(page.getByText('last used')).toHaveCount(0);
		expect(faults()).toEqual([]);
	});
}
