import { z } from 'zod';
import { base } from '../base-contract.ts';
import { emailAddress, secretToken } from '../site/people-contract.ts';
import { factorsContract, secondFactorAsked } from './factors-contract.ts';
import { newPassword } from './password-rule.ts';
import { person } from './person.ts';
import { preferences } from './preferences.ts';

export const signInInput = z.strictObject({
	email: z.email('Write an e-mail address.').max(200),
	password: z.string().min(1, 'Write your password.').max(200),
});

const tooMany = { TOO_MANY: { status: 429, message: 'Too many tries. Wait a quarter of an hour, then try again.' } };
const done = z.object({ done: z.literal(true) });

export const ownSession = z.object({
	/** What stands in the table: it names a session to its person and opens nothing. */
	sessionId: z.string(),
	/** Null where the session began before this was kept. */
	createdAt: z.date().nullable(),
	userAgent: z.string().nullable(),
	address: z.string().nullable(),
	expiresAt: z.date(),
	/** The one that asks. */
	isThis: z.boolean(),
});
export type OwnSession = z.infer<typeof ownSession>;

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
			...secondFactorAsked,
		})
		.input(signInInput)
		.output(person),
	/** The same answer, after the same work, whether the address has an account or not. */
	askReset: base
		.meta({ permission: 'public' })
		.errors(tooMany)
		.input(z.strictObject({ email: emailAddress }))
		.output(done),
	/** By the mailed link: a new password; every session of the person ends. */
	resetPassword: base
		.meta({ permission: 'public' })
		.errors({
			...tooMany,
			NOT_FOUND: { status: 404, message: 'This link does not hold: it was used, a newer one was sent, or its half hour is over.' },
		})
		.input(z.strictObject({ token: secretToken, password: newPassword }))
		.output(done),
	/** The other sessions end. */
	changePassword: base
		.meta({ permission: 'signed-in' })
		.errors({ ...tooMany, WRONG: { status: 422, message: 'This is not your password.' } })
		.input(z.strictObject({ current: z.string().min(1, 'Write your password.').max(200), password: newPassword }))
		.output(done),
	sessions: base.meta({ permission: 'signed-in' }).output(z.array(ownSession)),
	/** One of one's own; null: all but this one. */
	endSessions: base
		.meta({ permission: 'signed-in' })
		.input(z.strictObject({ sessionId: z.string().nullable() }))
		.output(z.object({ ended: z.number().int() })),
	preferences: base.meta({ permission: 'signed-in' }).output(preferences),
	savePreferences: base.meta({ permission: 'signed-in' }).input(preferences).output(preferences),
	...factorsContract,
	signOut: base.meta({ permission: 'signed-in' }).output(z.object({ signedOut: z.literal(true) })),
};
