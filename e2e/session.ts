import type { ConsoleMessage, Page } from 'playwright/test';
import type { Role } from '#shared/permissions.ts';

/** The demo's sign-ins, as the README lists them. */
export const demoPassword = 'plumb-and-level';
export const demoEmail: Record<Role, string> = {
	'site-engineer': 'site@marrowby.example',
	'project-engineer': 'project@marrowby.example',
	contractor: 'contractor@marrowby.example',
	'owners-representative': 'owner@marrowby.example',
	observer: 'observer@marrowby.example',
};

/** Signs a demo person in through the form. */
export async function signIn(page: Page, role: Role): Promise<void> {
	await page.goto('/sign-in');
	await page.getByLabel('E-mail').fill(demoEmail[role]);
	await page.getByLabel('Password').fill(demoPassword);
	await page.getByRole('button', { name: 'Sign in' }).click();
	await page.waitForURL((url) => !url.pathname.startsWith('/sign-in'));
}

/** Collects what a page complains of; the viewer's library is known to announce a coming change of its own. */
export function faultsOf(page: Page): () => string[] {
	const faults: string[] = [];
	page.on('pageerror', (error) => faults.push(String(error)));
	page.on('console', (message: ConsoleMessage) => {
		if (message.type() !== 'error' || /THREE\.Clock/.test(message.text())) return;
		// A refused call is answered in words on the page; the browser logs its status besides.
		if (/Failed to load resource: the server responded with a status of 4\d\d/.test(message.text())) return;
		faults.push(message.text());
	});
	return () => faults;
}
