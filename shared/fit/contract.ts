import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { findingSchema, fitInput, fitKind, fitRefusal, fitResult } from './fit-schema.ts';
import { fitNetwork, networkFits, networkOutlook } from './network-schema.ts';

/** in the fit · held back: checked against it, never in it · set aside: with a reason. */
export const shelfNames = ['in-the-fit', 'held-back', 'set-aside'] as const;
export const shelf = z.enum(shelfNames);
export type Shelf = z.infer<typeof shelf>;

/** all: whole · plan: its level is left out of the fit · level: its plan is. */
export const pairUses = ['all', 'plan', 'level'] as const;
export const pairUse = z.enum(pairUses);
export type PairUse = z.infer<typeof pairUse>;

export const shelving = z.strictObject({
	name: z.string().max(60),
	shelf,
	/** Why it does not lie in the fit, whole and as it was labelled. */
	reason: plainText(300).nullable(),
	/** Absent: all. */
	use: pairUse.optional(),
	/** Two targets whose labels were exchanged name each other. */
	exchangedWith: z.string().max(60).nullable().optional(),
});
export type Shelving = z.infer<typeof shelving>;

/** A target that was found to be a mark though it is named otherwise, or not at all. */
export const relabelling = z.strictObject({
	target: z.string().min(1).max(60),
	mark: z.string().min(1).max(60),
	reason: plainText(300),
});
export type Relabelling = z.infer<typeof relabelling>;

const vector = z.tuple([z.number(), z.number(), z.number()]);

/** Who answers for the survey, as printed; every part may be blank. */
export const surveyorInCharge = z.strictObject({
	name: z.string().trim().max(80),
	licence: z.string().trim().max(60),
	jurisdiction: z.string().trim().max(80),
});
export type SurveyorInCharge = z.infer<typeof surveyorInCharge>;

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
	/** What has no partner and could be matched by mutual distances: control known whole that was not sighted, targets (or, where none is coded, all points) that mean no mark. */
	loose: z
		.object({
			/** Survey frame. */
			targets: z.array(z.object({ name: z.string(), point: vector })),
			/** Design frame. */
			control: z.array(z.object({ name: z.string(), point: vector })),
		})
		.optional(),
	/** All that is or could be a target, as named in the file: what can be given another label. */
	targets: z.array(z.string()).optional(),
	/** Targets taken for marks they are not named like. */
	relabellings: z.array(relabelling).optional(),
	/** What the repeats of its targets tell of the set-up itself: `moved-setup`; and its level run: `level-misclosure`, `level-open`. Absent where there is nothing to tell. */
	findings: z.array(findingSchema).optional(),
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
	/** Who cannot be the second person. */
	adoptedById: z.uuid().nullable(),
	adoptedAt: z.date().nullable(),
	adoptedReason: z.string().nullable(),
	/** The second person. */
	checkedBy: z.string().nullable(),
	checkedAt: z.date().nullable(),
	/** What the second person said of it. */
	checkedNote: z.string().nullable(),
	/** False where the site has switched the second person off. */
	isSecondAsked: z.boolean(),
	surveyorInCharge: surveyorInCharge.nullable(),
	/** What is other than in the fit of this set-up before it, in sentences; none for the first. */
	changes: z.array(z.string()),
	/** SHA-256 of the canonical text of all that went in. */
	inputsSha256: z.string(),
	/** False where the control set has a newer one since. */
	isNewest: z.boolean(),
	/** The fits of other set-ups that it was made together with, itself among them; null for a fit of its own. */
	madeWith: networkFits.nullable(),
});
export type FitSummary = z.infer<typeof fitSummary>;

export const fitDetail = fitSummary.extend({
	knownScale: z.number().nullable(),
	shelves: z.array(shelving),
	relabellings: z.array(relabelling),
	result: fitResult,
	pairs: pairsOfSetup,
	/** What ties it to the others; null for a fit of its own. */
	network: fitNetwork.nullable(),
});
export type FitDetail = z.infer<typeof fitDetail>;

const setupInput = siteInput.extend({
	setupId: z.uuid(),
	controlSetId: z.uuid(),
});

export const fitContract = {
	pairs: base
		.meta({ permission: 'fit.see' })
		.input(setupInput.extend({ relabellings: z.array(relabelling).max(500).optional() }))
		.output(pairsOfSetup),
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
				relabellings: z.array(relabelling).max(500).optional(),
			}),
		)
		.output(fitDetail),
	/** Which set-ups of a survey are tied through which targets. */
	ties: base
		.meta({ permission: 'fit.see' })
		.input(siteInput.extend({ surveyId: z.uuid(), controlSetId: z.uuid() }))
		.output(networkOutlook),
	/** Set-ups of one survey adjusted together: a fit for each, all stored or none. */
	makeTogether: base
		.meta({ permission: 'fit.write' })
		.errors({
			NO_FIT: {
				status: 422,
				message: 'These set-ups cannot be adjusted together.',
				data: fitRefusal,
			},
		})
		.input(
			siteInput.extend({
				surveyId: z.uuid(),
				controlSetId: z.uuid(),
				setups: z
					.array(
						z.strictObject({
							setupId: z.uuid(),
							shelves: z.array(shelving).max(500),
							relabellings: z.array(relabelling).max(500).optional(),
						}),
					)
					.min(2)
					.max(50),
			}),
		)
		.output(networkFits),
	/** Once, with all fits that it was made together with; a newer adopted fit of a set-up supersedes its own, nothing edits it. */
	adopt: base
		.meta({ permission: 'fit.adopt' })
		.errors({
			STALE: {
				status: 409,
				message: 'The control changed since this fit was made. Fit again.',
			},
		})
		.input(siteInput.extend({ fitId: z.uuid(), reason: plainText(500), surveyorInCharge: surveyorInCharge.optional() }))
		.output(fitSummary),
	/** The fit's report as PDF. */
	report: base
		.meta({ permission: 'fit.see' })
		.input(siteInput.extend({ fitId: z.uuid() }))
		.output(z.instanceof(Blob)),
	/** A second person has checked the adopted fit; whoever adopted it cannot. */
	confirm: base
		.meta({ permission: 'fit.adopt' })
		.input(siteInput.extend({ fitId: z.uuid(), note: plainText(500), surveyorInCharge: surveyorInCharge.optional() }))
		.output(fitSummary),
};
