import { and, desc, eq, type SQL, sql } from 'drizzle-orm';
import type { z } from 'zod';
import { type AuditKind, auditKinds } from '#shared/record/audit-entry.ts';
import type { AuditLine, auditFilter } from '#shared/record/contract.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { auditEntries } from '../../db/schema/record.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';

type Filter = Omit<z.output<typeof auditFilter>, 'siteId'>;

/** Entries of the member's site alone, the newest first; `olderThan` is an entry of this site, else NOT_FOUND. */
export async function auditOf(
	db: Handle,
	member: Member,
	{ kind, userId, subjectId }: Filter,
	{ olderThan, most }: { olderThan: string | null; most: number },
): Promise<{ entries: AuditLine[]; hasOlder: boolean }> {
	const ofSite = eq(auditEntries.siteId, member.siteId);
	const wanted: (SQL | undefined)[] = [
		ofSite,
		kind === null ? undefined : eq(auditEntries.kind, kind),
		userId === null ? undefined : eq(auditEntries.userId, userId),
		subjectId === null ? undefined : eq(auditEntries.subjectId, subjectId),
	];
	if (olderThan !== null) {
		foundOne(
			await db
				.select({ id: auditEntries.id })
				.from(auditEntries)
				.where(and(ofSite, eq(auditEntries.id, olderThan))),
		);
		// Compared in the database: its times are finer than ours, and entries of one transaction share theirs.
		const last = sql`(select last.at, last.id from ${auditEntries} as last where last.id = ${olderThan})`;
		wanted.push(sql`(${auditEntries.at}, ${auditEntries.id}) < ${last}`);
	}
	const rows = await db
		.select({ row: auditEntries, name: users.name })
		.from(auditEntries)
		.leftJoin(users, eq(users.id, auditEntries.userId))
		.where(and(...wanted))
		.orderBy(desc(auditEntries.at), desc(auditEntries.id))
		.limit(most + 1);
	const isObserver = member.roles.every((role) => role === 'observer');
	return { entries: rows.slice(0, most).map(({ row, name }) => lineOf(row, name, isObserver)), hasOlder: rows.length > most };
}

/** Who only looks on reads what was done, not from which address, nor to whom mail went. */
function lineOf(row: typeof auditEntries.$inferSelect, name: string | null, isObserver: boolean): AuditLine {
	const { id, at, roles, subjectId, address, userId } = row;
	const { email: _email, ...dataWithoutAddress } = row.data;
	return {
		entryId: id,
		at,
		kind: kindOf(row.kind),
		who: userId === null ? null : { userId, name: name ?? '' },
		roles,
		subjectId,
		address: isObserver ? null : address,
		data: isObserver ? dataWithoutAddress : row.data,
	};
}

function kindOf(word: string): AuditKind {
	const kind = auditKinds.find((one) => one === word);
	if (kind === undefined) throw new Error(`The audit trail holds the unknown kind ${word}.`);
	return kind;
}
