import { openRoutes, type RequestContext, signedInRoutes } from '../../platform/guard.ts';
import { requireFresh } from '../../platform/second-factor.ts';
import { factorsOf } from './factors-of.ts';
import { beginCodes, confirmCodes, hasCodes, newRecoveryCodes, removeCodes } from './one-time-codes.ts';
import { addPasskey, askPasskey, beginPasskey, removePasskey, whoShowed } from './passkeys.ts';
import { reauthenticate } from './reauthenticate.ts';
import { noteFailedSignIn, noteSignIn } from './sign-in.ts';
import { askCode, beginSecond, takeMailedCode, takeSecond } from './sign-in-steps.ts';

const done = { done: true } as const;
/** Within a quarter of an hour, by one network address. */
const asksPerAddress = 60;
/** First codes tried on a new secret, by one person. */
const confirmTries = 10;

/** Opens the session; what is answered is the person. */
async function open(
	{ platform, session, address }: RequestContext,
	person: { userId: string; name: string; email: string },
	way: string,
	opened: { hasSecondFactor: boolean; isOwnDevice: boolean },
) {
	await noteSignIn(platform, { ...person, address }, way);
	await session.start(person.userId, opened);
	return { userId: person.userId, name: person.name, email: person.email };
}

/** Ways in besides the password, and what a person sets up for them. Every change of factors asks for a fresh session. */
export const factorsRoutes = {
	askCode: openRoutes.account.askCode.handler(async ({ input, errors, context }) => {
		const token = await askCode(context.platform, context.tries, input.email, context.address);
		if (token === null) throw errors.TOO_MANY();
		return { token };
	}),
	signInByCode: openRoutes.account.signInByCode.handler(async ({ input, errors, context }) => {
		const outcome = await takeMailedCode(context.platform, context.tries, input, context.address);
		if (outcome.state === 'too-many') throw errors.TOO_MANY();
		if (outcome.state === 'wrong') throw errors.WRONG();
		const { person, isOwnDevice } = outcome;
		if (await hasCodes(context.platform.db, person.userId)) {
			const stepToken = await context.platform.transaction((tx) => beginSecond(tx, context.platform, person.userId, isOwnDevice));
			throw errors.SECOND_FACTOR({ data: { stepToken } });
		}
		return open(context, person, 'mailed code', { hasSecondFactor: false, isOwnDevice });
	}),
	signInSecond: openRoutes.account.signInSecond.handler(async ({ input, errors, context }) => {
		const outcome = await takeSecond(context.platform, context.tries, input, context.address);
		if (outcome.state === 'too-many') throw errors.TOO_MANY();
		if (outcome.state === 'wrong') throw errors.WRONG();
		return open(context, outcome.person, 'second factor', { hasSecondFactor: true, isOwnDevice: outcome.isOwnDevice });
	}),
	askPasskey: openRoutes.account.askPasskey.handler(({ errors, context: { platform, tries, address } }) => {
		if (!tries.take(`passkeys from ${address}`, asksPerAddress)) throw errors.TOO_MANY();
		return platform.transaction((tx) => askPasskey(tx, platform, 'sign-in', null));
	}),
	signInByPasskey: openRoutes.account.signInByPasskey.handler(async ({ input, errors, context }) => {
		if (!context.tries.take(`passkeys shown from ${context.address}`, asksPerAddress)) throw errors.TOO_MANY();
		const person = await whoShowed(context.platform, 'sign-in', input, null);
		if (person === null) {
			await noteFailedSignIn(context.platform, null, context.address, 'passkey');
			throw errors.WRONG();
		}
		return open(context, person, 'passkey', { hasSecondFactor: true, isOwnDevice: true });
	}),
	factors: signedInRoutes.account.factors.handler(({ context: { platform, signedIn } }) => factorsOf(platform, signedIn)),
	reauthenticate: signedInRoutes.account.reauthenticate.handler(async ({ input, errors, context }) => {
		const { platform, tries, signedIn, session } = context;
		if (session.id === null) throw errors.UNAUTHORIZED();
		const outcome = await reauthenticate(platform, tries, signedIn, session.id, input.proof);
		if (outcome === 'too-many') throw errors.TOO_MANY();
		if (outcome === 'wrong') throw errors.WRONG();
		return { freshUntil: outcome };
	}),
	askPasskeyAgain: signedInRoutes.account.askPasskeyAgain.handler(({ errors, context: { platform, signedIn, tries, address } }) => {
		if (!tries.take(`passkeys from ${address}`, asksPerAddress)) throw errors.TOO_MANY();
		return platform.transaction((tx) => askPasskey(tx, platform, 'again', signedIn.userId));
	}),
	beginCodes: signedInRoutes.account.beginCodes.handler(({ context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		return platform.transaction((tx) => beginCodes(tx, platform, signedIn));
	}),
	confirmCodes: signedInRoutes.account.confirmCodes.handler(async ({ input, errors, context: { platform, signedIn, tries } }) => {
		requireFresh(signedIn, platform.now());
		if (!tries.take(`first codes of ${signedIn.userId}`, confirmTries)) throw errors.TOO_MANY();
		const recoveryCodes = await platform.transaction((tx) => confirmCodes(tx, platform, signedIn, input.code));
		if (recoveryCodes === null) throw errors.WRONG();
		return { recoveryCodes };
	}),
	removeCodes: signedInRoutes.account.removeCodes.handler(async ({ context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		await platform.transaction((tx) => removeCodes(tx, platform, signedIn));
		return done;
	}),
	newRecoveryCodes: signedInRoutes.account.newRecoveryCodes.handler(async ({ context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		return { recoveryCodes: await platform.transaction((tx) => newRecoveryCodes(tx, platform, signedIn)) };
	}),
	beginPasskey: signedInRoutes.account.beginPasskey.handler(({ context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		return platform.transaction((tx) => beginPasskey(tx, platform, signedIn));
	}),
	addPasskey: signedInRoutes.account.addPasskey.handler(async ({ input, errors, context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		const added = await addPasskey(platform, signedIn, input);
		if (added === null) throw errors.WRONG();
		return added;
	}),
	removePasskey: signedInRoutes.account.removePasskey.handler(async ({ input, context: { platform, signedIn } }) => {
		requireFresh(signedIn, platform.now());
		await platform.transaction((tx) => removePasskey(tx, platform, signedIn, input.passkeyId));
		return done;
	}),
};
