import { resolve } from 'node:path';
import { z } from 'zod';

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
	return {
		port: read('PORT'),
		host,
		dataDir: resolve(read('DATA_DIR')),
		databaseUrl: read('DATABASE_URL') ?? null,
		isCookieSecure: cookieSecure === undefined ? !isLoopback(host) : cookieSecure === 'on',
		proxyHops: read('TRUST_PROXY_HOPS'),
		largestUploadBytes: read('MAX_UPLOAD_MB') * 1_000_000,
		isDemoWished: read('DEMO') === 'on',
		isDevelopment: programArguments.includes('--dev'),
	};
}
