import { openRoutes } from '../../platform/guard.ts';
import { NotFound } from '../../platform/refuse.ts';

/** The mailbox of the local fake. It holds everybody's links, so it is there only where the demo's passwords are public anyway. */
export const mailRoutes = {
	mailbox: openRoutes.mail.mailbox.handler(({ context: { platform } }) => {
		const { mailbox } = platform.mail;
		if (mailbox === null) throw new NotFound();
		return mailbox.list();
	}),
};
