import { createTransport } from 'nodemailer';
import { MailRefused, type MailService } from './mail.ts';

/**
 * By SMTP (RFC 5321). A server that took a mail just before ours died cannot be asked whether it did, and would send a second one: the
 * postman does not repeat such a sending. The Message-ID is the mail's own, so that readers that look at it see the same mail once.
 */
export function smtpMail({ url, from }: { url: string; from: string }): MailService {
	const transport = createTransport(url, { from });
	return {
		isIdempotent: false,
		send: async ({ mailId, to, subject, text, html }) => {
			try {
				await transport.sendMail({ to, subject, text, html, messageId: `<${mailId}@batterboard>` });
			} catch (error) {
				// 5yz: permanent negative completion. All else (no connection, 4yz) may pass.
				const code = error instanceof Error && 'responseCode' in error ? Number(error.responseCode) : 0;
				if (code >= 500) throw new MailRefused(`The mail server said: ${error instanceof Error ? error.message : code}`);
				throw error;
			}
		},
		close: async () => transport.close(),
	};
}
