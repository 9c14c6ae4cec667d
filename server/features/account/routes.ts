import { audit } from '../../platform/audit.ts';
import { openRoutes, signedInRoutes } from '../../platform/guard.ts';
import { signIn } from './sign-in.ts';

export const accountRoutes = {
	me: openRoutes.account.me.handler(({ context }) => context.signedIn),
	signIn: openRoutes.account.signIn.handler(async ({ input, errors, context }) => {
		const outcome = await signIn(context.platform, context.tries, input, context.address);
		if (outcome.state === 'too-many') throw errors.TOO_MANY();
		if (outcome.state === 'wrong') throw errors.WRONG();
		await context.session.start(outcome.person.userId);
		return outcome.person;
	}),
	signOut: signedInRoutes.account.signOut.handler(async ({ context: { platform, session, signedIn } }) => {
		await session.end();
		await platform.transaction((tx) => audit(tx, signedIn, { kind: 'signed-out', subjectId: signedIn.userId, data: {} }));
		return { signedOut: true };
	}),
};
