import { z } from 'zod';
import { base, siteInput } from '../base-contract.ts';
import { toleranceSheet } from './sheet-schema.ts';

export const sheetSummary = z.object({
	sheetId: z.uuid(),
	name: z.string(),
	revision: z.number().int(),
	state: z.enum(['draft', 'issued', 'superseded']),
	decision: toleranceSheet.shape.decision,
	ruleCount: z.number().int(),
	issuedBy: z.string().nullable(),
	issuedAt: z.date().nullable(),
});
export type SheetSummary = z.infer<typeof sheetSummary>;

export const toleranceContract = {
	/** Newest first. */
	list: base.meta({ permission: 'tolerance.see' }).input(siteInput).output(z.array(sheetSummary)),
	get: base
		.meta({ permission: 'tolerance.see' })
		.input(siteInput.extend({ sheetId: z.uuid() }))
		.output(sheetSummary.extend({ sheet: toleranceSheet })),
};
