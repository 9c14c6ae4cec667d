import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readPublicKeys } from '#shared/record/public-key.ts';
import { readRecordFile } from '#shared/record/read-record-file.ts';
import { verifyRecords } from '#shared/record/verify-records.ts';
import { sealedRecords, signingKeys } from '../../server/db/schema/record.ts';
import { openRecordJournal } from '../../server/platform/record-journal.ts';
import { openRecordStore, type UnchainedBody } from '../../server/platform/record-store.ts';
import { openSigningKeys } from '../../server/platform/signing-keys.ts';
import { decisionBodyOf } from '../record/sample-records.ts';
import { openTestServer, type TestServer } from './harness.ts';

let server: TestServer;
const dataDir = mkdtempSync(join(tmpdir(), 'bb-store-'));
beforeAll(async () => {
	server = await openTestServer();
});
afterAll(async () => {
	await server.close();
	rmSync(dataDir, { recursive: true, force: true });
});

function bodyBy(userId: string): UnchainedBody {
	const { sequence: _, previous: __, site: ___, signedAt: ____, caution: _____, ...body } = decisionBodyOf(1, null);
	return { ...body, recordId: crypto.randomUUID(), signer: { ...body.signer, userId } };
}

const signOn = (siteId: string, userId: string, at = new Date()) =>
	server.platform.transaction((tx) => server.platform.records.seal(tx, siteId, bodyBy(userId), at));

async function textsOf(siteId: string): Promise<string[]> {
	const rows = await server.platform.db
		.select()
		.from(sealedRecords)
		.where(eq(sealedRecords.siteId, siteId))
		.orderBy(sealedRecords.sequence);
	return rows.map(({ text }) => text);
}

describe('sealed records', () => {
	it('signed at once still make one chain that the published key proves', async () => {
		const siteId = await server.addSite();
		const owner = await server.addMember(siteId, ['owners-representative']);
		await Promise.all(Array.from({ length: 5 }, () => signOn(siteId, owner.userId)));
		// A clock that was set back does not break the order of time.
		await signOn(siteId, owner.userId, new Date('2020-01-01T00:00:00Z'));
		const chain = `{"form":"batterboard-chain-1","records":[${(await textsOf(siteId)).join(',')}]}`;
		const file = readRecordFile(new TextEncoder().encode(chain));
		const [key] = await server.platform.db.select().from(signingKeys);
		if (file.kind === 'other') throw new Error(file.message);
		const verification = await verifyRecords(file, { keys: await readPublicKeys(key!.publicKeyPem) });
		expect(verification).toMatchObject({ genuine: true, reasons: expect.arrayContaining([expect.stringContaining('All 6 records')]) });
	});

	it('are never changed, deleted or emptied, nor put in where they do not follow', async () => {
		const siteId = await server.addSite();
		const owner = await server.addMember(siteId, ['owners-representative']);
		await signOn(siteId, owner.userId);
		const { db } = server.platform;
		const [row] = await db.select().from(sealedRecords).where(eq(sealedRecords.siteId, siteId));
		const tries = [
			() => db.update(sealedRecords).set({ text: 'x' }).where(eq(sealedRecords.id, row!.id)),
			() => db.delete(sealedRecords).where(eq(sealedRecords.id, row!.id)),
			() => db.execute(sql`truncate sealed_records`),
			() =>
				db
					.insert(sealedRecords)
					.values({ ...row!, id: crypto.randomUUID(), sha256: 'a'.repeat(64), sequence: 2, previous: 'b'.repeat(64) }),
			() => db.insert(sealedRecords).values({ ...row!, id: crypto.randomUUID(), sha256: 'a'.repeat(64), sequence: 1, previous: null }),
		];
		for (const attempt of tries) await expect(attempt()).rejects.toThrow();
		expect(await textsOf(siteId)).toEqual([row!.text]);
	});

	it('are compared with the journal at the start: what it lacks is added, what the database lost stops the signing', async () => {
		const siteId = await server.addSite();
		const owner = await server.addMember(siteId, ['owners-representative']);
		for (let n = 0; n < 3; n += 1) await signOn(siteId, owner.userId);
		const path = join(dataDir, 'journal', 'records.jsonl');
		const keys = await openSigningKeys(dataDir);
		const { db } = server.platform;
		const opened = async () => openRecordStore(db, keys.current, await openRecordJournal(path));
		// Other sites of this database are in the journal of none yet.
		expect((await (await opened()).compare()).filter((said) => said.includes(siteId))).toEqual([
			expect.stringContaining('3 sealed records'),
		]);
		expect(await (await opened()).compare()).toEqual([]);
		const journal = await openRecordJournal(path);
		const lost = JSON.stringify({ body: { site: { siteId } } });
		await journal.append(siteId, [{ text: lost, sha256: '0'.repeat(64) }]);
		const store = await opened();
		expect(await store.compare()).toEqual([expect.stringContaining('the database has lost, from record 4 on')]);
		await expect(server.platform.transaction((tx) => store.seal(tx, siteId, bodyBy(owner.userId), new Date()))).rejects.toMatchObject({
			code: 'journal-differs',
		});
		expect(await textsOf(siteId)).toHaveLength(3);
	});
});

describe('the published keys', () => {
	it('are there for anybody, the one in use first', async () => {
		const keys = await server.api().record.keys();
		expect(keys).toEqual([
			{
				sha256: expect.any(String),
				publicKeyPem: expect.stringContaining('BEGIN PUBLIC KEY'),
				publishedAt: expect.any(Date),
				retiredAt: null,
			},
		]);
		expect((await readPublicKeys(keys[0]!.publicKeyPem))[0]?.sha256).toBe(keys[0]?.sha256);
	});
});
