import { z } from 'zod';

/** Set-ups of one survey, adjusted together: what is asked, kept and shown. Metres, design frame. */

const vector = z.tuple([z.number(), z.number(), z.number()]);

/** A target that is known or that two set-ups saw. */
const tiedMark = z.object({
	mark: z.string(),
	/** In the control list; else it only ties set-ups together. */
	isKnown: z.boolean(),
	setupIds: z.array(z.uuid()),
});

/** Before it is done: what would tie which set-ups. */
export const networkOutlook = z.object({
	setups: z.array(
		z.object({
			setupId: z.uuid(),
			name: z.string(),
			levelling: z.enum(['levelled', 'free']),
			/** Targets that are control points. */
			knownCount: z.number().int(),
			/** Targets that are not, and that another set-up saw. */
			tieCount: z.number().int(),
			/** Has enough control for a fit of its own. */
			standsAlone: z.boolean(),
		}),
	),
	/** Marks that more than one set-up saw. */
	ties: z.array(tiedMark),
	/** Why they cannot be adjusted together, as a sentence; null where they can. */
	whyNot: z.string().nullable(),
});
export type NetworkOutlook = z.infer<typeof networkOutlook>;

/** What a fit that was made together with others is kept with, the same for all of them. */
export const fitNetwork = z.object({
	ties: z.array(
		tiedMark.extend({
			place: vector,
			sigma: vector,
			sightings: z.array(
				z.object({
					setupId: z.uuid(),
					/** Where the set-up puts it less where all together put it. */
					residual: vector,
					/** The largest correction over its σ, held against 3.29; null where nothing controls it. */
					normalised: z.number().nullable(),
				}),
			),
		}),
	),
	/** The block of Q between the unknowns of set-up a (rows) and of b (columns); every two set-ups once. */
	between: z.array(z.object({ a: z.uuid(), b: z.uuid(), covariance: z.array(z.array(z.number())) })),
});
export type FitNetwork = z.infer<typeof fitNetwork>;

/** The fits that were made together. */
export const networkFits = z.object({
	networkId: z.uuid(),
	fits: z.array(z.object({ fitId: z.uuid(), number: z.number().int(), setupId: z.uuid(), setupName: z.string() })),
});
export type NetworkFits = z.infer<typeof networkFits>;
