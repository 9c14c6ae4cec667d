import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';
import { pointTableReading, rowFault } from '../survey/point-table-schema.ts';

export const controlFrame = z.enum(['design', 'map']);

export const controlPoint = z.object({
	controlPointId: z.uuid(),
	name: z.string(),
	/** As given, in the set's frame; a coordinate that is not known is null. */
	givenM: z.tuple([z.number().nullable(), z.number().nullable(), z.number().nullable()]),
	/** Design frame. */
	designM: z.tuple([z.number().nullable(), z.number().nullable(), z.number().nullable()]),
	sigmaPlanM: z.number().nullable(),
	sigmaHeightM: z.number().nullable(),
	code: z.string(),
});
export type ControlPoint = z.infer<typeof controlPoint>;

export const controlSetSummary = z.object({
	controlSetId: z.uuid(),
	number: z.number().int(),
	name: z.string(),
	frame: controlFrame,
	fileName: z.string(),
	fileSha256: z.string(),
	pointCount: z.number().int(),
	storedBy: z.string(),
	storedAt: z.date(),
});
export type ControlSetSummary = z.infer<typeof controlSetSummary>;

export const controlContract = {
	/** Newest first. */
	list: base.meta({ permission: 'control.see' }).input(siteInput).output(z.array(controlSetSummary)),
	get: base
		.meta({ permission: 'control.see' })
		.input(siteInput.extend({ controlSetId: z.uuid() }))
		.output(controlSetSummary.extend({ points: z.array(controlPoint) })),
	/** All rows or none. */
	store: base
		.meta({ permission: 'control.write' })
		.errors({
			FAULTS: {
				status: 422,
				message: 'Some rows cannot be read; nothing was stored.',
				data: z.object({
					rowCount: z.number().int(),
					faults: z.array(rowFault),
				}),
			},
		})
		.input(
			siteInput.extend({
				uploadId: z.string().min(8).max(80),
				name: plainText(60),
				frame: controlFrame,
				reading: pointTableReading,
				/** Where the file gives no σ; null: none is known. */
				defaultSigmaM: z
					.strictObject({
						plan: z.number().positive().max(10),
						height: z.number().positive().max(10),
					})
					.nullable(),
			}),
		)
		.output(controlSetSummary),
};
