import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { roles } from '../permissions.ts';
import { boardAnswer } from './board-schema.ts';
import { emailAddress, peopleContract } from './people-contract.ts';
import { keptSettings, saveSettingsInput } from './site-settings.ts';

export const role = z.enum(roles);

/** The seven places of the line, in their order. */
export const knots = ['model', 'control', 'surveys', 'check', 'flags', 'pours', 'records'] as const;
/** solid: in order. half: in hand. open: nothing yet. */
export const knotState = z.enum(['solid', 'half', 'open']);
export const lineSchema = z.object({
	knots: z.array(z.object({ knot: z.enum(knots), state: knotState, figure: z.string() })),
	/** The newest check, where there is one: the line's knot "Check" leads to it. */
	newestCheckId: z.uuid().nullable(),
	/** False where something rests on what is no longer the newest. */
	isTaut: z.boolean(),
});
export type Line = z.infer<typeof lineSchema>;

export const siteSummary = z.object({
	siteId: z.uuid(),
	name: z.string(),
	isInvented: z.boolean(),
	roles: z.array(role),
});
export const siteDetail = siteSummary.extend({
	timeZone: z.string(),
	buildings: z.array(z.object({ buildingId: z.uuid(), name: z.string() })),
	companies: z.array(z.object({ companyId: z.uuid(), name: z.string() })),
	/** What was answered the last time an order of columns had to be asked. */
	columnOrder: z.enum(['PENZD', 'PNEZD']).nullable(),
	line: lineSchema,
});

/** The owner's contact is invited as the first owner's representative, who names all later ones. */
export const foundSiteInput = z.strictObject({
	name: plainText(80),
	timeZone: plainText(60),
	ownersContact: emailAddress.nullable().optional(),
});

export const siteContract = {
	list: base.meta({ permission: 'signed-in' }).output(z.array(siteSummary)),
	/** The founder is site and project engineer of a new site, with a starter sheet issued. */
	found: base.meta({ permission: 'signed-in' }).input(foundSiteInput).output(siteSummary),
	get: base.meta({ permission: 'site.see' }).input(siteInput).output(siteDetail),
	/** What waits for who asks, and what waits on others. */
	board: base.meta({ permission: 'site.see' }).input(siteInput).output(boardAnswer),
	settings: base.meta({ permission: 'site.see' }).input(siteInput).output(keptSettings),
	/** CONFLICT where somebody changed them since that version. */
	saveSettings: base.meta({ permission: 'site.write' }).input(saveSettingsInput).output(keptSettings),
	...peopleContract,
};
