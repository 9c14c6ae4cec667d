import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { checkpointSchema, elementSchema, modelReading } from './model-schema.ts';

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
});

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
	}),
});
export type RevisionDetail = z.infer<typeof revisionDetail>;

const revisionInput = siteInput.extend({ revisionId: z.uuid() });

export const modelContract = {
	list: base.meta({ permission: 'model.see' }).input(siteInput).output(z.array(modelSummary)),
	/** An uploaded IFC file becomes the next revision of a model, or the first of a new one; a job reads it. */
	read: base
		.meta({ permission: 'model.write' })
		.input(
			siteInput.extend({
				uploadId: z.string().min(8).max(80),
				model: z.union([z.object({ modelId: z.uuid() }), z.object({ newName: plainText(60) })]),
			}),
		)
		.output(z.object({ revisionId: z.uuid(), jobId: z.uuid() })),
	revision: base.meta({ permission: 'model.see' }).input(revisionInput).output(revisionDetail),
	elements: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.array(storedElement)),
	checkpoints: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.array(storedCheckpoint)),
	/** The picture: binary glTF, metres less a whole-metre origin that stands in its extras. Never measured on. */
	picture: base.meta({ permission: 'model.see' }).input(revisionInput).output(z.instanceof(Blob)),
};
