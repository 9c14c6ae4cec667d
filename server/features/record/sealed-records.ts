import { and, asc, desc, eq, inArray, or, type SQL, sql } from 'drizzle-orm';
import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { PublishedKey, RecordLine } from '#shared/record/contract.ts';
import { chainForm } from '#shared/record/sealed-record.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { sealedRecords, signingKeys } from '../../db/schema/record.ts';
import type { Member } from '../../platform/platform.ts';
import { newestRecord } from '../../platform/record-store.ts';
import { foundOne } from '../../platform/refuse.ts';

/** The keys of this server, the one in use first. */
export async function publishedKeys(db: Handle): Promise<PublishedKey[]> {
	return db.select().from(signingKeys).orderBy(sql`${signingKeys.retiredAt} desc nulls first`, desc(signingKeys.publishedAt));
}

const columns = {
	recordId: sealedRecords.id,
	sequence: sealedRecords.sequence,
	sha256: sealedRecords.sha256,
	previous: sealedRecords.previous,
	act: sealedRecords.act,
	pourId: sealedRecords.pourId,
	pourNumber: pours.number,
	pourName: pours.name,
	holdPoint: sealedRecords.holdPoint,
	keySha256: sealedRecords.keySha256,
	signedBy: users.name,
	signedAt: sealedRecords.signedAt,
};

/** Of the pours the member may see, the newest first, each with what ended it; and the head of the whole chain. */
export async function recordsOf(db: Handle, member: Member): Promise<{ head: string | null; length: number; records: RecordLine[] }> {
	const rows = await linesOf(db, member);
	const newest = await newestRecord(db, member.siteId);
	return { head: newest?.sha256 ?? null, length: newest?.sequence ?? 0, records: rows };
}

/** NOT_FOUND for another site's, and for another company's pour. */
export async function recordOf(db: Handle, member: Member, recordId: string): Promise<RecordLine & { text: string }> {
	const line = foundOne((await linesOf(db, member)).filter((one) => one.recordId === recordId));
	const { text } = foundOne(await db.select({ text: sealedRecords.text }).from(sealedRecords).where(eq(sealedRecords.id, recordId)));
	return { ...line, text };
}

/** The site's records in one text, in the form that `verify` takes. */
export async function chainTextOf(db: Handle, member: Member): Promise<{ text: string; length: number }> {
	const rows = await db
		.select({ text: sealedRecords.text })
		.from(sealedRecords)
		.where(eq(sealedRecords.siteId, member.siteId))
		.orderBy(asc(sealedRecords.sequence));
	return { text: `{"form":"${chainForm}","records":[${rows.map(({ text }) => text).join(',')}]}`, length: rows.length };
}

async function linesOf(db: Handle, member: Member): Promise<RecordLine[]> {
	const rows = await db
		.select({ ...columns, ended: sealedRecords.endsSha256 })
		.from(sealedRecords)
		.innerJoin(pours, eq(pours.id, sealedRecords.pourId))
		.innerJoin(users, eq(users.id, sealedRecords.signedBy))
		.where(and(eq(sealedRecords.siteId, member.siteId), ownPour(member)))
		.orderBy(desc(sealedRecords.sequence));
	const endedBy = new Map(rows.flatMap(({ ended, sequence, act }) => (ended === null ? [] : [[ended, { sequence, act }] as const])));
	return rows.map(({ ended: _, ...row }) => ({ ...row, endedBy: endedBy.get(row.sha256) ?? null }));
}

function ownPour({ roles, companyIds }: Member): SQL | undefined {
	if (seesEveryPour(roles)) return undefined;
	if (companyIds.length === 0) return sql`false`;
	const own = [...companyIds];
	return or(
		inArray(pours.companyId, own),
		sql`exists (select 1 from ${pourElements} where ${pourElements.pourId} = ${pours.id} and ${inArray(pourElements.companyId, own)})`,
	);
}
