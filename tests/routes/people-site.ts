import { randomUUID } from 'node:crypto';
import { setTimeout as wait } from 'node:timers/promises';
import { eq } from 'drizzle-orm';
import type { Role } from '#shared/permissions.ts';
import { memberships } from '../../server/db/schema/site.ts';
import { openTestServer, type TestServer } from './harness.ts';

export type Actor = Awaited<ReturnType<TestServer['addMember']>>;

/** A site with somebody in each role and in two firms, a second site with a stranger, and the mailbox. */
export async function openPeopleSite() {
	const server = await openTestServer({ proxyHops: 1 });
	const siteId = await server.addSite('Quay 7');
	const otherSiteId = await server.addSite('Elsewhere');
	const fennick = await server.addCompany(siteId, 'Fennick Forms');
	const oster = await server.addCompany(siteId, 'Oster Steel');
	const lead = await server.addMember(siteId, ['contractor'], fennick);
	await server.platform.db.update(memberships).set({ isLead: true }).where(eq(memberships.userId, lead.userId));
	const on: Record<string, Actor> = {
		site: await server.addMember(siteId, ['site-engineer']),
		project: await server.addMember(siteId, ['project-engineer']),
		lead,
		worker: await server.addMember(siteId, ['contractor'], fennick),
		steel: await server.addMember(siteId, ['contractor'], oster),
		owner: await server.addMember(siteId, ['owners-representative']),
		observer: await server.addMember(siteId, ['observer']),
		stranger: await server.addMember(otherSiteId, ['project-engineer']),
	};
	/** The newest link that was mailed to this address. */
	const tokenFor = async (email: string, than?: string): Promise<string> => {
		for (let n = 0; n < 150; n += 1) {
			const mail = (await server.api().mail.mailbox()).find(({ to }) => to === email);
			const token = /\/invitation#([\w-]+)/.exec(mail?.text ?? '')?.[1];
			if (token !== undefined && token !== than) return token;
			await wait(100);
		}
		throw new Error(`No mail came for ${email}`);
	};
	const asked = (role: Role | 'both-engineers', email = newEmail(), companyId: string | null = null) => ({
		siteId,
		email,
		role,
		companyId,
		isLead: false,
	});
	return { server, siteId, otherSiteId, fennick, oster, on, tokenFor, asked };
}

export const newEmail = () => `new.${randomUUID().slice(0, 8)}@example.com`;
