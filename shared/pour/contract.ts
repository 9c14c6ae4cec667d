import { z } from 'zod';
import { base, plainText, siteInput } from '../base-contract.ts';

export const pourSummary = z.object({
	pourId: z.uuid(),
	number: z.string(),
	name: z.string(),
	companyId: z.uuid(),
	companyName: z.string(),
	plannedAt: z.date().nullable(),
	elementCount: z.number().int(),
});
export type PourSummary = z.infer<typeof pourSummary>;

export const pourForm = z.strictObject({
	number: plainText(12),
	name: plainText(60),
	companyId: z.uuid(),
	plannedAt: z.date().nullable(),
	/** The model whose elements are concreted together, and which: whole storeys' classes. */
	modelId: z.uuid(),
	elements: z
		.array(z.strictObject({ storey: z.string().max(200), class: z.string().max(60) }))
		.min(1, 'Choose at least one kind of element.')
		.max(200),
});

export const pourContract = {
	/** By planned hour. A contractor sees those of its company. */
	list: base.meta({ permission: 'pour.see' }).input(siteInput).output(z.array(pourSummary)),
	add: base
		.meta({ permission: 'pour.write' })
		.input(siteInput.extend({ pour: pourForm }))
		.output(pourSummary),
};
