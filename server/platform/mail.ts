/** Mail as the outside world: one interface, several services behind it. Nothing but the postman sends; commands write to the outbox (`post-mail.ts`). */

/** What the start chose: the fake that the server runs itself, a real service, or none. */
export type MailSetting =
	| { kind: 'none' }
	| { kind: 'fake' }
	| { kind: 'resend'; apiKey: string; from: string }
	| { kind: 'smtp'; url: string; from: string };

export interface OutgoingMail {
	/** The same for every try: what a service may recognise a second sending by. */
	mailId: string;
	to: string;
	subject: string;
	text: string;
	html: string;
}

export interface MailService {
	/** Resolves when the service has taken it. `MailRefused` where trying again cannot help; any other throw is tried again. */
	send: (mail: OutgoingMail) => Promise<void>;
	/** True where the service takes the same `mailId` twice and sends once. Else an interrupted sending is never repeated. */
	isIdempotent: boolean;
	close: () => Promise<void>;
}

/** The service will not take this mail, now or later. */
export class MailRefused extends Error {
	constructor(message: string) {
		super(message);
		this.name = 'MailRefused';
	}
}

/** What the local fake was given, for its page. */
export interface Mailbox {
	/** The newest first. */
	list: () => Promise<KeptMail[]>;
}

export interface KeptMail {
	keptId: string;
	to: string;
	subject: string;
	text: string;
	html: string;
	at: Date;
}
