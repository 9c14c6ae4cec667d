import { addPerson } from '../features/account/add-person.ts';
import { expectGoodPassword } from '../features/account/good-password.ts';
import { invitationOf, joinSite } from '../features/site/accept.ts';
import { mayTryLink } from '../features/site/people-routes.ts';
import { openRoutes } from '../platform/guard.ts';
import { hashPassword } from '../platform/password.ts';
import { Refused } from '../platform/refuse.ts';

/**
 * A known person accepts as the one signed in, and only as the one the invitation went to; a new person says a name and a password, and is
 * signed in at once. The account, the memberships and the use of the link are one transaction.
 */
export const acceptInvitationRoute = openRoutes.site.acceptInvitation.handler(async ({ input, errors, context }) => {
	const { platform, tries, address, signedIn, session } = context;
	if (!mayTryLink(tries, address)) throw errors.TOO_MANY();
	const found = await invitationOf(platform.db, input.token, platform.now());
	const { siteId, email } = found.row;
	if (signedIn !== null && signedIn.userId !== found.knownUserId) {
		throw new Refused(
			'other-person',
			`This invitation went to ${email}, and you are signed in as ${signedIn.email}. Sign out, then open it again.`,
		);
	}
	if (found.knownUserId !== null) {
		if (signedIn === null) throw new Refused('sign-in-first', 'This address has an account here. Sign in with it, then accept.');
		await platform.transaction((tx) => joinSite(tx, platform, signedIn, found));
		return { siteId };
	}
	if (input.newPerson === null) throw new Refused('no-password', 'Say your name and choose a password.', 'password');
	const { name, password } = input.newPerson;
	expectGoodPassword(password, [name, email], 'newPerson.password');
	const passwordHash = await hashPassword(password);
	const person = await platform.transaction(async (tx) => {
		const added = await addPerson(tx, platform, { email, name, passwordHash, address });
		await joinSite(tx, platform, added, found);
		return added;
	});
	await session.start(person.userId);
	return { siteId };
});
