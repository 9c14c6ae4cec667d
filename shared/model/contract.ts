import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { choicesContract } from './choices-contract.ts';
import { newMark } from './mark-rules.ts';
import { checkpointSchema, elementSchema, modelReading } from './model-schema.ts';
import { requirement } from './requirement.ts';

export const revisionState = z.enum(['reading', 'ready', 'failed', 'cancelled']);
export const revisionSummary = z.object({
	revisionId: z.uuid(),
	modelId: z.uuid(),
	number: z.number().int(),
	fileName: z.string(),
	fileSha256: z.string(),
	fileBytes: z.number().int(),
	state: revisionState,
	/** Why it failed. */
	reason: z.string().nullable(),
	jobId: z.uuid().nullable(),
	uploadedBy: z.string(),
	uploadedAt: z.date(),
	elementCount: z.number().int(),
	checkpointCount: z.number().int(),
});
export type RevisionSummary = z.infer<typeof revisionSummary>;

export const modelSummary = z.object({
	modelId: z.uuid(),
	name: z.string(),
	/** Newest first. */
	revisions: z.array(revisionSummary),
});

/** An element as stored: its id stands for it within one revision. */
export const storedElement = elementSchema.extend({
	elementId: z.uuid(),
	checkpointCount: z.number().int(),
});
export type StoredElement = z.infer<typeof storedElement>;
export const storedCheckpoint = checkpointSchema.extend({
	elementId: z.uuid(),
	requirement,
	/** Who said so and why; null where nobody said anything. */
	choice: z.object({ by: z.string(), at: z.date(), reason: z.string().nullable() }).nullable(),
	/** Placed by a person on the model; null: by the reading. */
	added: z.object({ by: z.string(), at: z.date(), reason: z.string() }).nullable(),
});
export type StoredCheckpoint = z.infer<typeof storedCheckpoint>;

export const revisionDetail = revisionSummary.extend({
	modelName: z.string(),
	reading: modelReading.pick({
		schema: true,
		unit: true,
		metresPerUnit: true,
		project: true,
		mapConversion: true,
		storeys: true,
		grid: true,
		skipped: true,
		findings: true,
		choices: true,
	}),
});
export type RevisionDetail = z.infer<typeof revisionDetail>;

const revisionInput = siteInput.extend({ revisionId: z.uuid() });
const finiteVector = z.tuple([z.number(), z.number(), z.number()]);

export const modelContract = {
	...choicesContract,
	list: base.meta({ permission: 'model.see' }).input(siteInput).output(z.array(modelSummary)),
	/** An uploaded IFC file becomes the next revision of a model, or the first of a new one; a job reads it. */
	read: base
		.meta({ permission: 'model.write' })
		.input(
			siteInput.extend({
				uploadId: z.string().min(8).max(80),
				model: z.union([z.strictObject({ modelId: z.uuid() }), z.strictObject({ newName: plainText(60) })]),
			}),
		)
		.output(z.object({ revisionId: z.uuid(), jobId: z.uuid() })),
	revision: base.meta({ permission: 'model.see' }).input(revisionInput).output(revisionDetail),
	elements: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.array(storedElement)),
	checkpoints: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.array(storedCheckpoint)),
	/** The picture: binary glTF, metres less a whole-metre origin that stands in its extras. Never measured on. */
	picture: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.instanceof(Blob)),
	/** Required, by sample or left out: for all these, with one reason. It outlives the revision by the checkpoints' stable ids. */
	chooseCheckpoints: base
		.meta({ permission: 'checkpoint.write' })
		.input(
			revisionInput.extend({
				checkpointIds: z.array(z.string().min(1).max(40)).min(1, 'Choose at least one checkpoint.').max(20_000),
				requirement,
				/** Needed to leave out. */
				reason: plainText(400).nullable(),
			}),
		)
		.output(z.object({ changed: z.number().int() })),
	/** Other names for elements of the newest revision, kept across revisions by GlobalId; all or none. */
	renameMarks: base
		.meta({ permission: 'mark.write' })
		.input(
			revisionInput.extend({
				marks: z
					.array(z.strictObject({ elementId: z.uuid(), mark: newMark }))
					.min(1)
					.max(2000),
			}),
		)
		.output(z.object({ changed: z.number().int() })),
	/** A checkpoint of a person's own on a face of the newest revision's picture; place and outward normal in the design frame. */
	addCheckpoint: base
		.meta({ permission: 'checkpoint.write' })
		.input(
			revisionInput.extend({
				elementId: z.uuid(),
				place: finiteVector,
				normal: finiteVector,
				label: plainText(80),
				reason: plainText(400),
			}),
		)
		.output(z.object({ checkpointId: z.string(), mark: z.string() })),
	/** Marks for a field controller, without what is left out: mark,easting,northing,height,code. Metres. */
	fieldCsv: base
		.meta({ permission: 'model.see' })
		.input(revisionInput.extend({ frame: z.enum(['design', 'map']), storey: z.string().max(200).nullable() }))
		.output(z.instanceof(Blob)),
};
