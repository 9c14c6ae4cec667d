import { randomUUID } from 'node:crypto';
import { safe } from '@orpc/client';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { auditEntries } from '../../server/db/schema/record.ts';
import { audit } from '../../server/platform/audit.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
type Actor = Awaited<ReturnType<TestServer['addMember']>>;
let project: Actor;
let observer: Actor;
let stranger: Actor;
let siteId: string;
const all = { kind: null, userId: null, subjectId: null, olderThan: null };
beforeAll(async () => {
	server = await openTestServer({ proxyHops: 1 });
	siteId = await server.addSite();
	project = await server.addMember(siteId, ['project-engineer']);
	observer = await server.addMember(siteId, ['observer']);
	stranger = await server.addMember(await server.addSite('Elsewhere'), ['project-engineer']);
});
afterAll(() => server.close());

const codeOf = async (call: Promise<unknown>) => ((await safe(call)).error as { code?: string } | null)?.code ?? 'done';

describe('the record of acts', () => {
	it('tells who, as what, when, from where, before and after, of this site alone', async () => {
		const { companyId } = await project.api.site.addCompany({ siteId, name: 'Fennick Forms' });
		await project.api.site.renameCompany({ siteId, companyId, name: '=Fennick, "Forms"' });
		await stranger.api.site.addCompany({ siteId: stranger.siteId, name: 'Elsewhere Ltd' });
		const { entries } = await project.api.record.audit({ siteId, ...all });
		expect(entries.map(({ kind }) => kind)).toEqual(['company-renamed', 'company-added']);
		expect(entries[0]).toMatchObject({
			who: { userId: project.userId, name: project.name },
			roles: ['project-engineer'],
			subjectId: companyId,
			address: expect.stringMatching(/127\.0\.0\.1|::1/),
			data: { before: 'Fennick Forms', after: '=Fennick, "Forms"' },
			at: expect.any(Date),
		});
		const narrowed = await project.api.record.audit({ siteId, ...all, kind: 'company-added' });
		expect(narrowed.entries).toHaveLength(1);
		expect((await project.api.record.audit({ siteId, ...all, userId: stranger.userId })).entries).toEqual([]);
		expect((await project.api.record.audit({ siteId, ...all, subjectId: companyId })).entries).toHaveLength(2);

		const csv = await (await project.api.record.auditCsv({ siteId, kind: null, userId: null, subjectId: null })).text();
		const [head, newest] = csv.split('\r\n');
		expect(head).toBe('time (UTC),who,as,act,thing,from,details');
		expect(newest).toContain(`,project-engineer,project-engineer,company-renamed,${companyId},`);
		expect(csv).not.toContain('Elsewhere');
	});

	it('shows an observer neither addresses of machines nor of mail', async () => {
		await project.api.site.invite({ siteId, email: 'new.person@example.com', role: 'observer', companyId: null, isLead: false });
		const seen = await observer.api.record.audit({ siteId, ...all });
		expect(JSON.stringify(seen)).not.toContain('new.person@example.com');
		expect(seen.entries.every(({ address }) => address === null)).toBe(true);
		const csv = await (await observer.api.record.auditCsv({ siteId, kind: null, userId: null, subjectId: null })).text();
		expect(csv).not.toMatch(/new\.person|127\.0\.0\.1/);
	});

	it('is read page by page without a gap or a double, also where many stand at one moment', async () => {
		const paged = await server.addMember(await server.addSite('Busy'), ['project-engineer']);
		await server.platform.transaction(async (tx) => {
			for (let n = 0; n < 230; n += 1) await audit(tx, paged, { kind: 'company-added', subjectId: String(n), data: {} });
		});
		const seen: string[] = [];
		let olderThan: string | null = null;
		for (let page = 0; page < 4; page += 1) {
			const answer: Awaited<ReturnType<Actor['api']['record']['audit']>> = await paged.api.record.audit({
				...all,
				siteId: paged.siteId,
				olderThan,
			});
			seen.push(...answer.entries.map(({ subjectId }) => subjectId ?? ''));
			olderThan = answer.entries.at(-1)?.entryId ?? null;
			expect(answer.hasOlder).toBe(page < 2);
			if (!answer.hasOlder) break;
		}
		expect(seen).toHaveLength(230);
		expect(new Set(seen).size).toBe(230);
		// An entry of another site is no place to read on from.
		for (const foreign of [olderThan, randomUUID()]) {
			expect(await codeOf(project.api.record.audit({ siteId, ...all, olderThan: foreign }))).toBe('NOT_FOUND');
		}
	});

	it('takes the address from the last proxy, not from what the client wrote before it', async () => {
		await server.fetch('/rpc/site/addCompany', {
			method: 'POST',
			headers: { 'content-type': 'application/json', 'x-forwarded-for': '10.9.8.7, 198.51.100.77' },
			body: JSON.stringify({ json: { siteId, name: 'Forged & Sons' } }),
			cookie: project.cookie,
		});
		const { entries } = await project.api.record.audit({ siteId, ...all, kind: 'company-added' });
		expect(entries[0]?.address).toBe('198.51.100.77');
	});

	it('is never changed: the database refuses', async () => {
		await expect(server.platform.db.update(auditEntries).set({ kind: 'signed-in' })).rejects.toThrow();
		await expect(server.platform.db.delete(auditEntries)).rejects.toThrow();
		const { rows } = (await server.platform.db.execute(sql`select count(*)::int as n from audit_entries`)) as unknown as {
			rows: { n: number }[];
		};
		expect(rows[0]!.n).toBeGreaterThan(230);
	});
});
