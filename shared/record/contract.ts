import { z } from 'zod';
import { base, siteInput } from '../base-contract.ts';
import { auditKinds } from './audit-entry.ts';

export const auditEntry = z.object({
	entryId: z.uuid(),
	at: z.date(),
	kind: z.enum(auditKinds),
	/** Null: nobody with a session, as whoever came by a link. */
	who: z.object({ userId: z.uuid(), name: z.string() }).nullable(),
	/** As what: the roles held on the site at that moment. */
	roles: z.array(z.string()),
	subjectId: z.string().nullable(),
	/** The network address; null where the server itself acted, and for observers. */
	address: z.string().nullable(),
	data: z.record(z.string(), z.unknown()),
});
export type AuditLine = z.infer<typeof auditEntry>;

/** All of them together narrow the list; null: not asked. */
export const auditFilter = siteInput.extend({
	kind: z.enum(auditKinds).nullable(),
	userId: z.uuid().nullable(),
	/** All that was done to one thing. */
	subjectId: z.string().max(100).nullable(),
});

export const recordContract = {
	/** The newest first, so many at a time; `olderThan` is the last entry one has. */
	audit: base
		.meta({ permission: 'audit.see' })
		.input(auditFilter.extend({ olderThan: z.uuid().nullable() }))
		.output(z.object({ entries: z.array(auditEntry), hasOlder: z.boolean() })),
	/** The newest 20 000 of them as CSV. */
	auditCsv: base.meta({ permission: 'audit.see' }).input(auditFilter).output(z.instanceof(Blob)),
};
