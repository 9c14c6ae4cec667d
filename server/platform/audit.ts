import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import type { AuditEntry } from '#shared/record/audit-entry.ts';
import type { Transaction } from '../db/database.ts';
import { insertRows } from '../db/insert-rows.ts';
import { auditEntries } from '../db/schema/record.ts';
import type { Member, SignedIn } from './platform.ts';

/** Whoever came by a link, without a session. */
export interface Nobody {
	userId: null;
	address: string | null;
}

/**
 * Writes who did what, as what, inside the transaction that does it: no act without its entry, no entry without its act.
 * A member's entry belongs to the site, a signed-in person's to nobody but them; `siteId` names the site where the act made one.
 * The time is the database's, so that the order of entries does not depend on which process wrote them.
 */
export async function audit(tx: Transaction, actor: Member | SignedIn | Nobody, entry: AuditEntry, siteId?: string): Promise<void> {
	const member = 'siteId' in actor ? actor : null;
	await tx.insert(auditEntries).values({
		id: randomUUID(),
		siteId: member?.siteId ?? siteId ?? null,
		userId: actor.userId,
		roles: [...(member?.roles ?? [])],
		kind: entry.kind,
		subjectId: entry.subjectId,
		data: { ...entry.data, ...inStead(member) },
		address: actor.address ?? null,
		at: sql`now()`,
	});
}

/** The same for one act on many things, in few statements: an entry each, all of one moment. */
export async function auditEach(tx: Transaction, member: Member, entries: readonly AuditEntry[], now: Date): Promise<void> {
	const rows = entries.map(({ kind, subjectId, data }) => ({
		id: randomUUID(),
		siteId: member.siteId,
		userId: member.userId,
		roles: [...member.roles],
		kind,
		subjectId,
		data: { ...data, ...inStead(member) },
		address: member.address ?? null,
		at: now,
	}));
	await insertRows(tx, auditEntries, rows);
}

/** A deputy's act says in whose stead, by role. */
function inStead(member: Member | null): { asDeputyOf?: string[] } {
	const held = member?.asDeputyOf ?? [];
	return held.length === 0 ? {} : { asDeputyOf: held.map(({ role, name }) => `${name} (${role})`) };
}
