import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { checkpointDensity } from '../site/site-settings.ts';
import { mapScaleReading, pickedAxis } from './reading-choices.ts';

/** What people say of how a model is read, and what would come of it. */

const said = { reason: z.string(), by: z.string(), at: z.date() };

export const storedAxis = pickedAxis.extend({ axisId: z.uuid(), by: z.string(), at: z.date() });
export type StoredAxis = z.infer<typeof storedAxis>;

export const saidOfReading = z.object({
	unit: z.object({ metresPerUnit: z.number(), ...said }).nullable(),
	mapScale: z.object({ choice: mapScaleReading, ...said }).nullable(),
	axes: z.array(storedAxis),
	knownElements: z.number().int(),
	/** The newest revision was read otherwise than it would be now; null where none is read. */
	isReadAnew: z.boolean().nullable(),
});
export type SaidOfReading = z.infer<typeof saidOfReading>;

/** An element of the newest revision that stands and is shaped as one of the revision before, which had another GlobalId. */
export const samePair = z.object({
	globalId: z.string(),
	knownAs: z.string(),
	mark: z.string(),
	markBefore: z.string(),
	class: z.string(),
});
export type SamePair = z.infer<typeof samePair>;

export const placingPreview = z.object({
	placing: checkpointDensity,
	/** Null while it is counted. */
	models: z
		.array(
			z.object({
				modelId: z.uuid(),
				name: z.string(),
				revision: z.number().int(),
				/** Checkpoints that readings place, without a person's own. */
				classes: z.array(z.object({ class: z.string(), before: z.number().int(), after: z.number().int() })),
			}),
		)
		.nullable(),
});
export type PlacingPreview = z.infer<typeof placingPreview>;

const modelInput = siteInput.extend({ modelId: z.uuid() });
const plan = z.tuple([z.number().min(-1e8).max(1e8), z.number().min(-1e8).max(1e8)]);
const begun = z.object({ revisionId: z.uuid(), jobId: z.uuid() });

export const choicesContract = {
	saidOfReading: base.meta({ permission: 'model.see' }).input(modelInput).output(saidOfReading),
	/** Which of two readings holds; null takes the choice back. Later readings go by it. */
	chooseReading: base
		.meta({ permission: 'model.write' })
		.input(
			modelInput.extend({
				choice: z.union([
					z.strictObject({ subject: z.literal('unit'), metresPerUnit: z.number().positive().max(1e4).nullable() }),
					z.strictObject({ subject: z.literal('map-scale'), reading: mapScaleReading.nullable() }),
				]),
				reason: plainText(400),
			}),
		)
		.output(saidOfReading),
	/** An axis of the model's building through two picked points, for files without a grid. */
	nameAxis: base
		.meta({ permission: 'mark.write' })
		.input(
			modelInput.extend({
				tag: z
					.string()
					.trim()
					.regex(/^[\p{L}\p{N}]{1,3}\p{L}?$/u, 'One to four letters or figures: C, 12, C2.'),
				from: plan,
				to: plan,
			}),
		)
		.output(saidOfReading),
	removeAxis: base
		.meta({ permission: 'mark.write' })
		.input(modelInput.extend({ axisId: z.uuid() }))
		.output(saidOfReading),
	/** The newest file of a model once more, as its next revision, by all that is said now. */
	readAgain: base.meta({ permission: 'model.write' }).input(modelInput).output(begun),
	/** Elements whose GlobalIds the newest revision renewed, though shape and place are the same to 1 mm. */
	sameElements: base
		.meta({ permission: 'model.see' })
		.input(siteInput.extend({ revisionId: z.uuid() }))
		.output(z.array(samePair)),
	/** Accepts all that is proposed, once; the file is read again, and names, choices and pours keep. */
	acceptSame: base
		.meta({ permission: 'model.write' })
		.input(siteInput.extend({ revisionId: z.uuid(), count: z.number().int().min(1) }))
		.output(begun),
	/** Counts what another density would place on each model's newest revision; a job counts. */
	previewPlacing: base
		.meta({ permission: 'site.write' })
		.input(siteInput.extend({ placing: checkpointDensity }))
		.output(z.object({ previewId: z.uuid(), jobId: z.uuid() })),
	placingPreview: base
		.meta({ permission: 'site.write' })
		.input(siteInput.extend({ previewId: z.uuid() }))
		.output(placingPreview),
};
