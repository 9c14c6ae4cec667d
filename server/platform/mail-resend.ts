import { Resend } from 'resend';
import { MailRefused, type MailService } from './mail.ts';

interface ResendSetting {
	apiKey: string;
	from: string;
	/** Where the service listens; without it the real one's address. */
	baseUrl?: string;
}

/** Faults of the mail itself; a limit, a key that is being changed or a service that is down may be over in a minute. */
const finalStatus = new Set([400, 404, 405, 413, 422]);

/** Through the service's own SDK. The mail's id goes along as idempotency key, so that one that was taken twice is sent once. */
export function resendMail({ apiKey, from, baseUrl }: ResendSetting): MailService {
	const resend = new Resend(apiKey, baseUrl === undefined ? {} : { baseUrl });
	return {
		isIdempotent: true,
		send: async ({ mailId, to, subject, text, html }) => {
			const { error } = await resend.emails.send({ from, to, subject, text, html }, { idempotencyKey: mailId });
			if (error === null) return;
			const said = `The mail service said: ${error.message}`;
			if (error.statusCode !== null && finalStatus.has(error.statusCode)) throw new MailRefused(said);
			throw new Error(said);
		},
		close: async () => {},
	};
}
