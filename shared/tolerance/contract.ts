import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { characteristic, type ToleranceSheet, toleranceSheet } from './sheet-schema.ts';

/** By its name alone, so that the type of all routes stays short enough to be written out. */
const wholeSheet: z.ZodType<ToleranceSheet, ToleranceSheet> = toleranceSheet;

const limitsPair = z.tuple([z.number().nullable(), z.number().nullable()]).nullable();
const verdictWord = z.enum(['within', 'outside', 'too-close-to-call', 'undecided', 'not-measured', 'no-tolerance']);

/** What a sheet would decide and change, on the newest revisions and what was last measured. */
export const sheetWeight = z.object({
	/** Checkpoints each rule decides, in the sheet's order. */
	decides: z.array(z.number().int()),
	undecidedCount: z.number().int(),
	/** Those that no rule decides, by class and characteristic, with the first marks of each. */
	undecided: z.array(z.object({ class: z.string(), characteristic, count: z.number().int(), marks: z.array(z.string()) })),
	changeCount: z.number().int(),
	/** The verdicts it would change, by what becomes what, with the first of each. */
	changes: z.array(
		z.object({
			was: verdictWord,
			is: verdictWord,
			count: z.number().int(),
			first: z.array(
				z.object({
					checkpointId: z.string(),
					mark: z.string(),
					label: z.string(),
					characteristic,
					deviationMm: z.number(),
					wasMm: limitsPair,
					isMm: limitsPair,
				}),
			),
		}),
	),
	faults: z.array(z.object({ ruleIndex: z.number().int(), mark: z.string(), fault: z.enum(['crossed', 'length', 'height', 'thickness']) })),
});
export type SheetWeight = z.infer<typeof sheetWeight>;

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
		.output(sheetSummary.extend({ sheet: wholeSheet, contentSha256: z.string(), issueReason: z.string().nullable() })),
	/** What this sheet would decide and change; nothing is stored. */
	weigh: base
		.meta({ permission: 'tolerance.see' })
		.input(siteInput.extend({ sheet: wholeSheet }))
		.output(sheetWeight),
	/** A new draft, or the draft as it is now; `seenSha256` is the content it was begun from. */
	saveDraft: base
		.meta({ permission: 'tolerance.write' })
		.input(siteInput.extend({ sheetId: z.uuid().nullable(), seenSha256: z.string().nullable(), sheet: wholeSheet }))
		.output(z.object({ sheetId: z.uuid(), contentSha256: z.string() })),
	discardDraft: base
		.meta({ permission: 'tolerance.write' })
		.input(siteInput.extend({ sheetId: z.uuid() }))
		.output(z.object({})),
	/** The issued one before is superseded. What is issued is what was read: `seenSha256`. */
	issue: base
		.meta({ permission: 'tolerance.write' })
		.input(siteInput.extend({ sheetId: z.uuid(), seenSha256: z.string(), reason: plainText(500) }))
		.output(z.object({ revision: z.number().int() })),
};
