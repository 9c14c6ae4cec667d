import { z } from 'zod';
import { base, siteInput } from '../base-contract.ts';
import { auditKinds } from './audit-entry.ts';
import { decisionActs } from './sealed-record.ts';

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

/** A sealed record in a list. */
export const recordLine = z.object({
	recordId: z.uuid(),
	sequence: z.number().int(),
	/** Of its whole text. */
	sha256: z.string(),
	previous: z.string().nullable(),
	act: z.enum([...decisionActs, 'withdrawn']),
	pourId: z.uuid(),
	pourNumber: z.string(),
	pourName: z.string(),
	holdPoint: z.enum(['before-pour', 'after-pour']),
	keySha256: z.string(),
	signedBy: z.string(),
	signedAt: z.date(),
	/** The later record that withdraws it or takes its place, by its number; null while it holds. */
	endedBy: z.object({ sequence: z.number().int(), act: z.enum([...decisionActs, 'withdrawn']) }).nullable(),
});
export interface RecordLine extends z.infer<typeof recordLine> {}
const lineAnswer: z.ZodType<RecordLine> = recordLine;
const wholeRecord: z.ZodType<RecordLine & { text: string }> = recordLine.extend({ text: z.string() });

export const publishedKey = z.object({
	sha256: z.string(),
	publicKeyPem: z.string(),
	publishedAt: z.date(),
	retiredAt: z.date().nullable(),
});
export type PublishedKey = z.infer<typeof publishedKey>;

export const recordContract = {
	/** The public halves of all keys this server signed with, the one in use first. */
	keys: base.meta({ permission: 'public' }).output(z.array(publishedKey)),
	/** The newest first. A contractor sees those of its pours. `head` is the chain's end, whoever asks. */
	list: base
		.meta({ permission: 'record.see' })
		.input(siteInput)
		.output(z.object({ head: z.string().nullable(), length: z.number().int(), records: z.array(lineAnswer) })),
	/** One record, with its text exactly as it was sealed. */
	get: base
		.meta({ permission: 'record.see' })
		.input(siteInput.extend({ recordId: z.uuid() }))
		.output(wholeRecord),
	/** The site's whole chain as a file, for those who see all of the site. */
	chain: base.meta({ permission: 'record.chain' }).input(siteInput).output(z.instanceof(Blob)),
	/** The newest first, so many at a time; `olderThan` is the last entry one has. */
	audit: base
		.meta({ permission: 'audit.see' })
		.input(auditFilter.extend({ olderThan: z.uuid().nullable() }))
		.output(z.object({ entries: z.array(auditEntry), hasOlder: z.boolean() })),
	/** The newest 20 000 of them as CSV. */
	auditCsv: base.meta({ permission: 'audit.see' }).input(auditFilter).output(z.instanceof(Blob)),
};
