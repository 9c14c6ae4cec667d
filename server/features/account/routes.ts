import { audit } from '../../platform/audit.ts';
import { openRoutes, signedInRoutes } from '../../platform/guard.ts';
import { changePassword } from './change-password.ts';
import { factorsRoutes } from './factors-routes.ts';
import { endSessions, sessionsOf } from './own-sessions.ts';
import { preferencesOf, savePreferences } from './preferences.ts';
import { askReset, resetPassword } from './reset-password.ts';
import { signIn } from './sign-in.ts';

const done = { done: true } as const;

export const accountRoutes = {
	me: openRoutes.account.me.handler(({ context }) => context.signedIn),
	signIn: openRoutes.account.signIn.handler(async ({ input, errors, context }) => {
		const outcome = await signIn(context.platform, context.tries, input, context.address);
		if (outcome.state === 'too-many') throw errors.TOO_MANY();
		if (outcome.state === 'wrong') throw errors.WRONG();
		if (outcome.state === 'second') throw errors.SECOND_FACTOR({ data: { stepToken: outcome.stepToken } });
		await context.session.start(outcome.person.userId);
		return outcome.person;
	}),
	askReset: openRoutes.account.askReset.handler(async ({ input, errors, context }) => {
		if (!(await askReset(context.platform, context.tries, input.email, context.address))) throw errors.TOO_MANY();
		return done;
	}),
	resetPassword: openRoutes.account.resetPassword.handler(async ({ input, errors, context }) => {
		if (!(await resetPassword(context.platform, context.tries, input, context.address))) throw errors.TOO_MANY();
		return done;
	}),
	changePassword: signedInRoutes.account.changePassword.handler(async ({ input, errors, context }) => {
		const outcome = await changePassword(context.platform, context.tries, context.signedIn, context.session.id, input);
		if (outcome === 'too-many') throw errors.TOO_MANY();
		if (outcome === 'wrong') throw errors.WRONG();
		return done;
	}),
	sessions: signedInRoutes.account.sessions.handler(({ context: { platform, signedIn, session } }) =>
		sessionsOf(platform.db, signedIn, session.id, platform.now()),
	),
	endSessions: signedInRoutes.account.endSessions.handler(async ({ input, context: { platform, signedIn, session } }) => ({
		ended: await platform.transaction((tx) => endSessions(tx, signedIn, session.id, input.sessionId)),
	})),
	preferences: signedInRoutes.account.preferences.handler(({ context: { platform, signedIn } }) =>
		preferencesOf(platform.db, signedIn.userId),
	),
	savePreferences: signedInRoutes.account.savePreferences.handler(({ input, context: { platform, signedIn } }) =>
		platform.transaction((tx) => savePreferences(tx, signedIn, input)),
	),
	...factorsRoutes,
	signOut: signedInRoutes.account.signOut.handler(async ({ context: { platform, session, signedIn } }) => {
		await session.end();
		await platform.transaction((tx) => audit(tx, signedIn, { kind: 'signed-out', subjectId: signedIn.userId, data: {} }));
		return { signedOut: true };
	}),
};
