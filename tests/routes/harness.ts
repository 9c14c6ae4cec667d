import { randomUUID } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createORPCClient } from '@orpc/client';
import { RPCLink } from '@orpc/client/fetch';
import type { ContractRouterClient } from '@orpc/contract';
import type { contract } from '#shared/contract.ts';
import type { Role } from '#shared/permissions.ts';
import type { Configuration } from '../../server/app/configuration.ts';
import { jobRunners } from '../../server/app/jobs.ts';
import { startOn } from '../../server/app/start.ts';
import { users } from '../../server/db/schema/account.ts';
import { companies, memberships, sites } from '../../server/db/schema/site.ts';
import { hashPassword } from '../../server/platform/password.ts';
import type { JobRunner, Member, Platform, SignedIn } from '../../server/platform/platform.ts';
import { openSessions, type Sessions } from '../../server/platform/session.ts';
import { openTestDatabase } from './test-database.ts';

export type Api = ContractRouterClient<typeof contract>;

/** A whole server on a database of its own, with what a test needs to fill it. */
export interface TestServer {
	address: string;
	platform: Platform;
	sessions: Sessions;
	/** The API with this cookie header, or without a session. */
	api: (cookie?: string) => Api;
	/** `fetch` from one of our own pages. */
	fetch: (path: string, init?: RequestInit & { cookie?: string }) => Promise<Response>;
	/** A person with a session; a hashed password only where one is given (it costs a tenth of a second). */
	addPerson: (name: string, password?: string) => Promise<SignedIn & { cookie: string }>;
	addSite: (name?: string) => Promise<string>;
	addCompany: (siteId: string, name: string) => Promise<string>;
	/** A person with these roles on the site; contractors need a company. */
	addMember: (siteId: string, roles: readonly Role[], companyId?: string) => Promise<Member & { cookie: string; api: Api }>;
	close: () => Promise<void>;
}

export async function openTestServer(
	settings: Partial<Configuration> = {},
	runners: readonly JobRunner[] = jobRunners,
): Promise<TestServer> {
	const dataDir = mkdtempSync(join(tmpdir(), 'bb-test-'));
	const configuration: Configuration = {
		port: 0,
		host: '127.0.0.1',
		dataDir,
		databaseUrl: null,
		isCookieSecure: false,
		proxyHops: 0,
		largestUploadBytes: 5_000_000,
		isDemoWished: false,
		mail: { kind: 'fake' },
		photos: { kind: 'disk' },
		publicUrl: null,
		isDevelopment: false,
		...settings,
	};
	const { address, platform, close } = await startOn(await openTestDatabase(), configuration, runners);
	const sessions = openSessions({ db: platform.db, isSecure: false, now: platform.now });
	const api = (cookie?: string): Api =>
		createORPCClient(new RPCLink({ url: `${address}/rpc`, headers: { origin: address, ...(cookie === undefined ? {} : { cookie }) } }));

	const addPerson: TestServer['addPerson'] = async (name, password) => {
		const userId = randomUUID();
		const email = `${name.toLowerCase().replaceAll(/[^a-z]+/g, '.')}.${userId.slice(0, 8)}@example.com`;
		const passwordHash = password === undefined ? 'none' : await hashPassword(password);
		await platform.db.insert(users).values({ id: userId, email, name, passwordHash, createdAt: platform.now() });
		return { userId, name, email, cookie: cookieOf(await sessions.create(userId)) };
	};
	return {
		address,
		platform,
		sessions,
		api,
		fetch: (path, { cookie, headers, ...init } = {}) =>
			fetch(`${address}${path}`, { ...init, headers: { origin: address, ...(cookie === undefined ? {} : { cookie }), ...headers } }),
		addPerson,
		addSite: async (name = 'Testfield 1') => {
			const siteId = randomUUID();
			await platform.db.insert(sites).values({
				id: siteId,
				name,
				timeZone: 'Europe/Zurich',
				isInvented: true,
				isFitCheckedBySecond: true,
				createdAt: platform.now(),
			});
			return siteId;
		},
		addCompany: async (siteId, name) => {
			const companyId = randomUUID();
			await platform.db.insert(companies).values({ id: companyId, siteId, name });
			return companyId;
		},
		addMember: async (siteId, roles, companyId) => {
			const person = await addPerson(roles.join(' and '));
			const fromAt = platform.now();
			const rows = roles.map((role) => ({ id: randomUUID(), siteId, userId: person.userId, role, companyId: companyId ?? null, fromAt }));
			await platform.db.insert(memberships).values(rows);
			return { ...person, siteId, roles, companyIds: companyId === undefined ? [] : [companyId], api: api(person.cookie) };
		},
		close: async () => {
			await close();
			rmSync(dataDir, { recursive: true, force: true });
		},
	};
}

/** What a browser would send back of a Set-Cookie header. */
export function cookieOf(setCookie: string): string {
	return setCookie.split(';')[0] ?? '';
}
