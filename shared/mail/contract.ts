import { z } from 'zod';
import { base } from '../base-contract.ts';

export const mailboxMail = z.object({
	keptId: z.uuid(),
	to: z.string(),
	subject: z.string(),
	text: z.string(),
	at: z.date(),
});
export type MailboxMail = z.infer<typeof mailboxMail>;

export const mailContract = {
	/** What the local fake of the mail service was given, the newest first; NOT_FOUND where a real service sends, or none. */
	mailbox: base.meta({ permission: 'public' }).output(z.array(mailboxMail)),
};
