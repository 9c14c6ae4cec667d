import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { expect, type Page, test } from 'playwright/test';
import { faultsOf, signIn } from './session.ts';

/** Every page of the demo site in its widths and colour sets: no serious fault of accessibility, nothing wider than the screen. */

const axeSource = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
/** Colours are the same at every width, and the sun set has the widest letters: each width in light and sun, each set at the desk. */
const widths = [
	{ name: 'desk', width: 1280, height: 960, sets: ['light', 'dark', 'sun'] },
	{ name: 'tablet', width: 820, height: 1180, sets: ['sun'] },
	{ name: 'phone', width: 360, height: 780, sets: ['light', 'sun'] },
] as const;
/** Pictures are kept where asked for, to be looked at beside the drawings. */
const pictureFolder = process.env.PICTURES;

interface AxeFault {
	id: string;
	impact: string | null;
	nodes: { html: string }[];
}

async function seriousFaults(page: Page): Promise<string[]> {
	await page.evaluate(axeSource);
	const violations = await page.evaluate(async () => {
		const { axe } = window as unknown as { axe: { run: (context: Document, options: object) => Promise<{ violations: AxeFault[] }> } };
		const tags = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
		return (await axe.run(document, { runOnly: { type: 'tag', values: tags } })).violations;
	});
	return violations
		.filter(({ impact }) => impact === 'serious' || impact === 'critical')
		.map(({ id, nodes }) => `${id}: ${nodes[0]?.html.slice(0, 160)}`);
}

/** The address of every page of the demo site, by name. */
async function pagesOf(page: Page): Promise<[string, string][]> {
	await page.goto('/sites');
	await page.getByRole('link', { name: /Marrowby/ }).click();
	await page.waitForURL(/\/sites\/[0-9a-f-]{36}$/);
	const site = new URL(page.url()).pathname;
	const linkTo = async (from: string, pattern: RegExp) => {
		await page.goto(from);
		await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
		const links = await page.locator('a').evaluateAll((all) => all.map((link) => link.getAttribute('href') ?? ''));
		const found = links.find((href) => pattern.test(href));
		expect(found, `a link like ${pattern} on ${from}`).toBeDefined();
		return new URL(found ?? '', page.url()).pathname;
	};
	const id = '[0-9a-f-]{36}';
	const revision = await linkTo(`${site}/model`, new RegExp(`/model/${id}`));
	const survey = await linkTo(`${site}/surveys`, new RegExp(`/surveys/${id}$`));
	const fit = await linkTo(survey, new RegExp(`/setups/${id}`));
	const check = await linkTo(`${site}/check`, new RegExp(`/checks/${id}`));
	const sheet = await linkTo(check, new RegExp(`/sheets/${id}`));
	const pour = await linkTo(`${site}/pours`, new RegExp(`/pours/${id}$`));
	const flag = await linkTo(`${site}/flags`, new RegExp(`/flags/${id}$`));
	const record = await linkTo(`${site}/records`, new RegExp(`/records/${id}$`));
	return [
		['sites', '/sites'],
		['board', site],
		['people', `${site}/people`],
		['record of acts', `${site}/audit`],
		['settings', `${site}/settings`],
		['account', '/account'],
		['mailbox', '/mailbox'],
		['model', `${site}/model`],
		['revision', revision],
		['control', `${site}/control`],
		['surveys', `${site}/surveys`],
		['survey', survey],
		['fit', fit],
		['checks', `${site}/check`],
		['check', check],
		['sheet', sheet],
		['pours', `${site}/pours`],
		['pour', pour],
		['elements of a pour', `${pour}/elements`],
		['flags', `${site}/flags`],
		['flag', flag],
		['shoot list', `${site}/shoot-list`],
		['records', `${site}/records`],
		['record', record],
		['verify', '/verify'],
		['sheets', `${site}/sheets`],
		['before going out', `${site}/plan-survey`],
		['did a mark move', `${site}/stability`],
		['nowhere', `${site}/nowhere`],
	];
}

test('every page stands in every width and colour set', async ({ page }) => {
	test.setTimeout(600_000);
	const faults = faultsOf(page);
	await signIn(page, 'site-engineer');
	const pages = await pagesOf(page);
	const wrong: string[] = [];
	for (const { name: widthName, width, height, sets } of widths) {
		await page.setViewportSize({ width, height });
		for (const set of sets) {
			await page.evaluate((wish) => localStorage.setItem('batterboard.colour-set', wish), set);
			for (const [name, address] of pages) {
				await page.goto(address);
				await expect(page.getByRole('heading', { level: 1 })).toBeVisible();
				await page.evaluate(() => document.fonts.ready);
				await expect(page.locator('[role=status][aria-label$="loading"]')).toHaveCount(0);
				const overhang = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
				if (overhang > 0) wrong.push(`${name} ${widthName} ${set}: ${overhang} px wider than the screen`);
				for (const fault of await seriousFaults(page)) wrong.push(`${name} ${widthName} ${set}: ${fault}`);
				if (pictureFolder) await page.screenshot({ path: `${pictureFolder}/${name}-${widthName}-${set}.png` });
			}
		}
	}
	expect(wrong).toEqual([]);
	expect(faults()).toEqual([]);
});
