import type { Mailbox, MailService, MailSetting } from './mail.ts';
import { startFakeMailService } from './mail-fake.ts';
import { resendMail } from './mail-resend.ts';
import { smtpMail } from './mail-smtp.ts';

export interface OpenMail {
	/** Null: mails wait in the outbox, and what needs one is refused. */
	service: MailService | null;
	/** Of the fake alone: who reads it has everybody's links. */
	mailbox: Mailbox | null;
	close: () => Promise<void>;
}

/** The mail service that the start chose; the fake is started with it and keeps its mails in `mailboxFolder`. */
export async function openMail(setting: MailSetting, mailboxFolder: string): Promise<OpenMail> {
	if (setting.kind === 'none') return { service: null, mailbox: null, close: async () => {} };
	if (setting.kind === 'fake') {
		const { baseUrl, apiKey, mailbox, close } = await startFakeMailService(mailboxFolder);
		return { service: resendMail({ apiKey, from: 'Batterboard <site@batterboard.example>', baseUrl }), mailbox, close };
	}
	const service = setting.kind === 'resend' ? resendMail(setting) : smtpMail(setting);
	return { service, mailbox: null, close: service.close };
}
