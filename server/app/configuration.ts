import { resolve } from 'node:path';
import { z } from 'zod';
import type { MailSetting } from '../platform/mail.ts';
import type { PhotoSetting } from '../platform/photo-store.ts';

/** What the environment says, read once. A wrong value stops the start with a sentence. */
export interface Configuration {
	port: number;
	host: string;
	dataDir: string;
	/** PostgreSQL server; null: the embedded database. */
	databaseUrl: string | null;
	/** Session cookies by TLS only. */
	isCookieSecure: boolean;
	/** Proxies of ours before the server: so many entries of X-Forwarded-For are believed, counted from the end. */
	proxyHops: number;
	largestUploadBytes: number;
	/** Fill an empty database with the invented demo site. */
	isDemoWished: boolean;
	mail: MailSetting;
	photos: PhotoSetting;
	/** What links in mails begin with; null: the address we listen on. */
	publicUrl: string | null;
	/** The client by Vite's middleware instead of the built files. */
	isDevelopment: boolean;
}

/** Reached from this machine alone. */
export function isLoopback(host: string): boolean {
	return ['127.0.0.1', '::1', 'localhost'].includes(host);
}

const onOff = z.enum(['on', 'off']);
const whole = (least: number, most: number) => z.string().regex(/^\d+$/).transform(Number).pipe(z.number().min(least).max(most));

const variables = {
	PORT: { schema: whole(0, 65_535).default(4173), says: 'a port number, 0 to 65535' },
	HOST: { schema: z.string().min(1).default('127.0.0.1'), says: 'an address to listen on' },
	DATA_DIR: { schema: z.string().min(1).default('.data'), says: 'a folder' },
	DATABASE_URL: {
		schema: z
			.string()
			.regex(/^postgres(ql)?:\/\//)
			.optional(),
		says: 'an address that begins with postgres://',
	},
	COOKIE_SECURE: { schema: onOff.optional(), says: 'on or off' },
	TRUST_PROXY_HOPS: { schema: whole(0, 10).default(0), says: 'a number of proxies, 0 to 10' },
	MAX_UPLOAD_MB: { schema: whole(1, 4000).default(400), says: 'megabytes, 1 to 4000' },
	FILES_URL: {
		schema: z
			.string()
			.regex(/^s3:\/\/[a-z0-9][a-z0-9.-]{1,61}[a-z0-9](\?endpoint=https?:\/\/\S+)?$/)
			.optional(),
		says: 'a bucket for photos, like s3://site-photos or s3://site-photos?endpoint=http://127.0.0.1:9000',
	},
	RESEND_API_KEY: { schema: z.string().min(8).optional(), says: 'a key of the mail service' },
	MAIL_URL: {
		schema: z
			.string()
			.regex(/^smtps?:\/\//)
			.optional(),
		says: 'an address that begins with smtp:// or smtps://',
	},
	MAIL_FROM: {
		schema: z
			.string()
			.regex(/^[^\r\n@]*[^\s@<>]+@[^\s@<>]+>?$/)
			.optional(),
		says: 'a sender, like Site office <site@your-firm.example>',
	},
	PUBLIC_URL: {
		schema: z
			.string()
			.regex(/^https?:\/\/[^/?#]+\/?$/)
			.transform((url) => url.replace(/\/$/, ''))
			.optional(),
		says: 'the address people reach this server at, like https://board.your-firm.example',
	},
	DEMO: { schema: onOff.default('on'), says: 'on or off' },
};

/** Throws a sentence that names the variable. An empty variable counts as not set. */
export function readConfiguration(environment: Record<string, string | undefined>, programArguments: readonly string[]): Configuration {
	const read = <Name extends keyof typeof variables>(name: Name): z.output<(typeof variables)[Name]['schema']> => {
		const { schema, says } = variables[name];
		const parsed = schema.safeParse(environment[name] || undefined);
		if (!parsed.success) throw new Error(`${name} is "${environment[name]}"; it must be ${says}.`);
		return parsed.data as z.output<(typeof variables)[Name]['schema']>;
	};
	const host = read('HOST');
	const cookieSecure = read('COOKIE_SECURE');
	const isDemoWished = read('DEMO') === 'on';
	return {
		port: read('PORT'),
		host,
		dataDir: resolve(read('DATA_DIR')),
		databaseUrl: read('DATABASE_URL') ?? null,
		isCookieSecure: cookieSecure === undefined ? !isLoopback(host) : cookieSecure === 'on',
		proxyHops: read('TRUST_PROXY_HOPS'),
		largestUploadBytes: read('MAX_UPLOAD_MB') * 1_000_000,
		isDemoWished,
		mail: mailSetting({ apiKey: read('RESEND_API_KEY'), url: read('MAIL_URL'), from: read('MAIL_FROM'), isDemoWished }),
		photos: photoSetting(read('FILES_URL')),
		publicUrl: read('PUBLIC_URL') ?? null,
		isDevelopment: programArguments.includes('--dev'),
	};
}

function photoSetting(url: string | undefined): PhotoSetting {
	if (url === undefined) return { kind: 'disk' };
	const [bucket = '', endpoint] = url.slice('s3://'.length).split('?endpoint=');
	return { kind: 's3', bucket, endpoint: endpoint ?? null };
}

interface MailVariables {
	apiKey: string | undefined;
	url: string | undefined;
	from: string | undefined;
	isDemoWished: boolean;
}

/** A real service where one is named. Else the demo has a fake with a mailbox that anybody can read; without the demo there is none. */
function mailSetting({ apiKey, url, from, isDemoWished }: MailVariables): MailSetting {
	if (apiKey !== undefined && url !== undefined)
		throw new Error('RESEND_API_KEY and MAIL_URL are both set; mail goes one way: leave one out.');
	if (apiKey === undefined && url === undefined) return { kind: isDemoWished ? 'fake' : 'none' };
	if (from === undefined) throw new Error('MAIL_FROM is not set; with a real mail service it must say the sender of our mails.');
	return apiKey === undefined ? { kind: 'smtp', url: url ?? '', from } : { kind: 'resend', apiKey, from };
}
