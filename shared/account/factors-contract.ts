import { z } from 'zod';
import { base, plainText } from '../base-contract.ts';
import { emailAddress, secretToken } from '../site/people-contract.ts';
import { person } from './person.ts';

const tooMany = { TOO_MANY: { status: 429, message: 'Too many tries. Wait a quarter of an hour, then try again.' } };
const wrongCode = { WRONG: { status: 401, message: 'This code does not hold: it is mistyped, used already, or its time is over.' } };
const wrongPasskey = { WRONG: { status: 401, message: 'This passkey was not accepted. Try again, or sign in another way.' } };
const done = z.object({ done: z.literal(true) });

/** Password and mailed code open a session only where no second factor is set up; else the answer is this, with what the next call brings back. */
export const secondFactorAsked = {
	SECOND_FACTOR: {
		status: 401,
		message: 'Write the code of your app, or a recovery code.',
		data: z.object({ stepToken: secretToken }),
	},
};

/** Six digits of an app, or a recovery code; spaces and dashes are nothing. */
export const factorCode = z.string().trim().min(6, 'Six digits, or a recovery code.').max(40);

const base64url = (most: number) =>
	z
		.string()
		.min(1)
		.max(most)
		.regex(/^[\w-]+$/);
const credential = z.strictObject({
	id: base64url(1400),
	rawId: base64url(1400),
	type: z.literal('public-key'),
	authenticatorAttachment: z.enum(['platform', 'cross-platform']).optional(),
	clientExtensionResults: z.looseObject({}),
});

/** What a browser answers when a passkey is made (WebAuthn level 3, RegistrationResponseJSON). */
export const madePasskey = credential.extend({
	response: z.strictObject({
		clientDataJSON: base64url(5000),
		attestationObject: base64url(20_000),
		authenticatorData: base64url(5000).optional(),
		transports: z.array(z.string().max(20)).max(10).optional(),
		publicKeyAlgorithm: z.number().int().optional(),
		publicKey: base64url(5000).optional(),
	}),
});
/** What a browser answers when a passkey signs (AuthenticationResponseJSON). */
export const shownPasskey = credential.extend({
	response: z.strictObject({
		clientDataJSON: base64url(5000),
		authenticatorData: base64url(5000),
		signature: base64url(2000),
		userHandle: base64url(200).optional(),
	}),
});

/** What the browser is asked with, as WebAuthn's JSON; made and read by one library on both sides. */
const passkeyOptions = z.object({ challengeId: z.uuid(), options: z.record(z.string(), z.unknown()) });

export const passkey = z.object({
	passkeyId: z.string(),
	name: z.string(),
	createdAt: z.date(),
	lastUsedAt: z.date().nullable(),
});
export type Passkey = z.infer<typeof passkey>;

export const factors = z.object({
	/** Since when codes of an app are asked at sign-in; null: not set up. */
	codesSince: z.date().nullable(),
	recoveryCodesLeft: z.number().int(),
	passkeys: z.array(passkey),
	/** Where passkeys work: this server by its name; null where it is only known by a number. */
	passkeyOrigin: z.string().nullable(),
	/** Until when the person counts as just having proved who they are. */
	freshUntil: z.date().nullable(),
	/** A second factor was shown in this session. */
	hasSecondFactor: z.boolean(),
	/** Sites of the person's that ask for one. */
	askedBy: z.array(z.string()),
});

export const again = z.discriminatedUnion('way', [
	z.strictObject({ way: z.literal('password'), password: z.string().min(1, 'Write your password.').max(200) }),
	z.strictObject({ way: z.literal('code'), code: factorCode }),
	z.strictObject({ way: z.literal('passkey'), challengeId: z.uuid(), response: shownPasskey }),
]);

export const factorsContract = {
	/** Mails a code where the address has an account; the same answer after the same work where it has none. */
	askCode: base
		.meta({ permission: 'public' })
		.errors(tooMany)
		.input(z.strictObject({ email: emailAddress }))
		.output(z.object({ token: secretToken })),
	signInByCode: base
		.meta({ permission: 'public' })
		.errors({ ...tooMany, ...wrongCode, ...secondFactorAsked })
		.input(
			z.strictObject({
				token: secretToken,
				code: z.string().trim().min(4).max(20),
				/** The session is kept on this device; else it ends within half a day. */
				isOwnDevice: z.boolean(),
			}),
		)
		.output(person),
	signInSecond: base
		.meta({ permission: 'public' })
		.errors({ ...tooMany, ...wrongCode })
		.input(z.strictObject({ stepToken: secretToken, code: factorCode }))
		.output(person),
	askPasskey: base.meta({ permission: 'public' }).errors(tooMany).input(z.strictObject({})).output(passkeyOptions),
	signInByPasskey: base
		.meta({ permission: 'public' })
		.errors({ ...tooMany, ...wrongPasskey })
		.input(z.strictObject({ challengeId: z.uuid(), response: shownPasskey }))
		.output(person),
	factors: base.meta({ permission: 'signed-in' }).output(factors),
	/** For ten minutes the session counts as just opened: what signing, and every change of factors, asks for. */
	reauthenticate: base
		.meta({ permission: 'signed-in' })
		.errors({ ...tooMany, WRONG: { status: 422, message: 'This was not right. Try again.' } })
		.input(z.strictObject({ proof: again }))
		.output(z.object({ freshUntil: z.date() })),
	askPasskeyAgain: base.meta({ permission: 'signed-in' }).errors(tooMany).output(passkeyOptions),
	/** A new secret for an app; nothing asks for its codes before one was confirmed. */
	beginCodes: base.meta({ permission: 'signed-in' }).output(z.object({ secret: z.string(), uri: z.string() })),
	confirmCodes: base
		.meta({ permission: 'signed-in' })
		.errors({ ...tooMany, WRONG: { status: 422, message: 'This is not the code of the moment. Is the phone’s clock right?' } })
		.input(z.strictObject({ code: factorCode }))
		.output(z.object({ recoveryCodes: z.array(z.string()) })),
	removeCodes: base.meta({ permission: 'signed-in' }).output(done),
	newRecoveryCodes: base.meta({ permission: 'signed-in' }).output(z.object({ recoveryCodes: z.array(z.string()) })),
	beginPasskey: base.meta({ permission: 'signed-in' }).output(passkeyOptions),
	addPasskey: base
		.meta({ permission: 'signed-in' })
		.errors({ WRONG: { status: 422, message: 'This passkey was not accepted. Begin again.' } })
		.input(z.strictObject({ challengeId: z.uuid(), name: plainText(60), response: madePasskey }))
		.output(passkey),
	removePasskey: base
		.meta({ permission: 'signed-in' })
		.input(z.strictObject({ passkeyId: z.string().min(1).max(1400) }))
		.output(done),
};
