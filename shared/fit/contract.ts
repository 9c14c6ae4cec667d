import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { fitInput, fitKind, fitRefusal, fitResult } from './fit-schema.ts';

/** in the fit · held back: checked against it, never in it · set aside: with a reason. */
export const shelfNames = ['in-the-fit', 'held-back', 'set-aside'] as const;
export const shelf = z.enum(shelfNames);
export type Shelf = z.infer<typeof shelf>;

export const shelving = z.object({
	name: z.string().max(60),
	shelf,
	reason: plainText(300).nullable(),
});
export type Shelving = z.infer<typeof shelving>;

/** Target and control point that are the same mark, ready for the engine. */
export const pairsOfSetup = z.object({
	setupId: z.uuid(),
	controlSetId: z.uuid(),
	/** Survey against control in the design frame, with σ where both sides have them, else without. */
	pairs: fitInput.shape.pairs,
	/** Control points that this set-up did not sight. */
	controlWithoutTarget: z.array(z.string()),
	/** Points coded as targets (CP, BM, TP, BS, CHK, TGT) that no control point is named like. */
	targetsWithoutControl: z.array(z.string()),
	/** Why σ are not used, where they are not. */
	sigmaNote: z.string().nullable(),
	/** What was taken for the same mark though written differently, and repeats that were averaged: sentences. */
	notes: z.array(z.string()).optional(),
});
export type PairsOfSetup = z.infer<typeof pairsOfSetup>;

export const fitSummary = z.object({
	fitId: z.uuid(),
	number: z.number().int(),
	surveyId: z.uuid(),
	setupId: z.uuid(),
	setupName: z.string(),
	controlSetId: z.uuid(),
	kind: fitKind,
	state: z.enum(['made', 'adopted', 'superseded']),
	rmsM: z.number(),
	pairCount: z.number().int(),
	madeBy: z.string(),
	madeAt: z.date(),
	adoptedBy: z.string().nullable(),
	adoptedAt: z.date().nullable(),
	adoptedReason: z.string().nullable(),
	checkedBy: z.string().nullable(),
	/** SHA-256 of the canonical text of all that went in. */
	inputsSha256: z.string(),
	/** False where the control set has a newer one since. */
	isNewest: z.boolean(),
});
export type FitSummary = z.infer<typeof fitSummary>;

export const fitDetail = fitSummary.extend({
	knownScale: z.number().nullable(),
	shelves: z.array(shelving),
	result: fitResult,
	pairs: pairsOfSetup,
});
export type FitDetail = z.infer<typeof fitDetail>;

const setupInput = siteInput.extend({
	setupId: z.uuid(),
	controlSetId: z.uuid(),
});

export const fitContract = {
	pairs: base.meta({ permission: 'fit.see' }).input(setupInput).output(pairsOfSetup),
	/** Newest first; all of the site, or one set-up's. */
	list: base
		.meta({ permission: 'fit.see' })
		.input(siteInput.extend({ setupId: z.uuid().optional() }))
		.output(z.array(fitSummary)),
	get: base
		.meta({ permission: 'fit.see' })
		.input(siteInput.extend({ fitId: z.uuid() }))
		.output(fitDetail),
	/** The server computes what is stored. */
	make: base
		.meta({ permission: 'fit.write' })
		.errors({
			NO_FIT: {
				status: 422,
				message: 'There is no fit on these pairs.',
				data: fitRefusal,
			},
		})
		.input(
			setupInput.extend({
				kind: fitKind,
				knownScale: z.number().min(0.5).max(2).nullable(),
				shelves: z.array(shelving).max(500),
			}),
		)
		.output(fitDetail),
	/** Once; a newer adopted fit of the set-up supersedes it, nothing edits it. */
	adopt: base
		.meta({ permission: 'fit.adopt' })
		.errors({
			STALE: {
				status: 409,
				message: 'The control changed since this fit was made. Fit again.',
			},
		})
		.input(siteInput.extend({ fitId: z.uuid(), reason: plainText(500) }))
		.output(fitSummary),
};
