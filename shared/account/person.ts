import { z } from 'zod';

export const person = z.object({
	userId: z.uuid(),
	name: z.string(),
	email: z.string(),
});
export type Person = z.infer<typeof person>;
