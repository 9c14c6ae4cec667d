import { z } from 'zod';
import { base } from '../base-contract.ts';

export const person = z.object({
	userId: z.uuid(),
	name: z.string(),
	email: z.string(),
});
export type Person = z.infer<typeof person>;

export const signInInput = z.object({
	email: z.email('Write an e-mail address.').max(200),
	password: z.string().min(1, 'Write your password.').max(200),
});

export const accountContract = {
	me: base.meta({ permission: 'public' }).output(person.nullable()),
	signIn: base
		.meta({ permission: 'public' })
		.errors({
			WRONG: {
				status: 401,
				message: 'This address and password do not belong together.',
			},
			TOO_MANY: {
				status: 429,
				message: 'Too many tries. Wait a quarter of an hour, then try again.',
			},
		})
		.input(signInInput)
		.output(person),
	signOut: base.meta({ permission: 'signed-in' }).output(z.object({ signedOut: z.literal(true) })),
};
