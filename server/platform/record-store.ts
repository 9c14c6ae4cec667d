import { createHash } from 'node:crypto';
import { and, asc, desc, eq, gt } from 'drizzle-orm';
import { sealRecord } from '#shared/record/seal-record.ts';
import { type DecisionBody, type RecordBody, recordCaution, type WithdrawalBody } from '#shared/record/sealed-record.ts';
import type { Db, Handle, Transaction } from '../db/database.ts';
import { lockSite } from '../db/lock-site.ts';
import { sealedRecords } from '../db/schema/record.ts';
import { sites } from '../db/schema/site.ts';
import type { RecordJournal } from './record-journal.ts';
import { foundOne, Refused } from './refuse.ts';
import type { SigningKey } from './signing-keys.ts';

/** What the command says; number, hash of the one before, site and caution are put to it here. */
type Unchained<Body extends RecordBody> = Omit<Body, 'sequence' | 'previous' | 'site' | 'caution' | 'signedAt'>;
export type UnchainedBody = Unchained<DecisionBody> | Unchained<WithdrawalBody>;

export interface RecordStore {
	/**
	 * Seals a record inside the transaction that does the act: no act without its record, no record without its act. The site stays locked
	 * until the end. Refused where database and journal differ: a chain is not continued that may have lost its end.
	 */
	seal: (tx: Transaction, siteId: string, body: UnchainedBody, now: Date) => Promise<{ sha256: string; sequence: number; signedAt: Date }>;
	/** After the commit, before anybody is told: the site's new records are in the journal, on the disk. */
	journal: (siteId: string) => Promise<void>;
	/** At the start: what differs between database and journal, in sentences; records that only the journal lacks are added to it. */
	compare: () => Promise<string[]>;
}

/** Records in the database, signed with the key in use, each also in the journal. */
export function openRecordStore(db: Db, key: SigningKey, journal: RecordJournal): RecordStore {
	/** Sites whose journal has what the database has not. */
	const diverged = new Set<string>();
	const bringUp = async (siteId: string): Promise<number> => {
		const kept = journal.hashes.get(siteId)?.length ?? 0;
		const missing = await db
			.select({ sha256: sealedRecords.sha256, text: sealedRecords.text })
			.from(sealedRecords)
			.where(and(eq(sealedRecords.siteId, siteId), gt(sealedRecords.sequence, kept)))
			.orderBy(asc(sealedRecords.sequence));
		if (missing.length > 0) await journal.append(siteId, missing);
		return missing.length;
	};
	let last: Promise<unknown> = Promise.resolve();
	const inTurn = <Result>(work: () => Promise<Result>): Promise<Result> => {
		const next = last.then(work);
		last = next.catch(() => undefined);
		return next;
	};
	return {
		seal: async (tx, siteId, said, now) => {
			if (diverged.has(siteId))
				throw new Refused(
					'journal-differs',
					'The records in the database and in the journal on the disk differ, so nothing is signed until whoever runs this server has looked. Nothing was changed.',
				);
			await lockSite(tx, siteId);
			const site = foundOne(await tx.select().from(sites).where(eq(sites.id, siteId)));
			const before = await newestRecord(tx, siteId);
			// A clock that was set back does not make a record older than the one it follows.
			const signedAt = before !== null && before.signedAt > now ? before.signedAt : now;
			const body = {
				...said,
				sequence: (before?.sequence ?? 0) + 1,
				previous: before?.sha256 ?? null,
				site: { siteId, name: site.name, timeZone: site.timeZone, isInvented: site.isInvented },
				signedAt: signedAt.toISOString(),
				caution: recordCaution,
			} satisfies RecordBody;
			const { text } = sealRecord(body, { keySha256: key.sha256, sign: key.sign });
			const sha256 = createHash('sha256').update(text, 'utf8').digest('hex');
			const about = body.act === 'withdrawn' ? body.pour : body.shown.pour;
			await tx.insert(sealedRecords).values({
				id: body.recordId,
				siteId,
				sequence: body.sequence,
				sha256,
				previous: body.previous,
				act: body.act,
				pourId: about.pourId,
				holdPoint: about.holdPoint,
				endsSha256: body.act === 'withdrawn' ? body.withdraws : body.supersedes,
				keySha256: key.sha256,
				signedBy: body.signer.userId,
				signedAt,
				text,
			});
			return { sha256, sequence: body.sequence, signedAt };
		},
		journal: (siteId) => inTurn(() => bringUp(siteId)).then(() => undefined),
		compare: () =>
			inTurn(async () => {
				const sentences: string[] = [];
				const stored = await hashesOf(db);
				for (const siteId of new Set([...stored.keys(), ...journal.hashes.keys()])) {
					const [inDatabase, inJournal] = [stored.get(siteId) ?? [], journal.hashes.get(siteId) ?? []];
					const same = inJournal.findIndex((sha256, index) => sha256 !== inDatabase[index]);
					if (same >= 0) {
						diverged.add(siteId);
						const lost = inJournal.length - inDatabase.length;
						sentences.push(
							same >= inDatabase.length
								? `Site ${siteId}: the journal has ${lost} sealed records that the database has lost, from record ${same + 1} on. Nothing is signed there until the database is restored.`
								: `Site ${siteId}: record ${same + 1} in the journal is another than in the database. One of them was changed; nothing is signed there until that is settled.`,
						);
					} else if (inJournal.length < inDatabase.length) {
						const added = await bringUp(siteId);
						sentences.push(`Site ${siteId}: ${added} sealed records of the database were not in the journal yet and are added to it.`);
					}
				}
				return sentences;
			}),
	};
}

/** The chain's end; null where nothing was signed on the site yet. */
export async function newestRecord(db: Handle, siteId: string): Promise<{ sequence: number; sha256: string; signedAt: Date } | null> {
	const [newest] = await db
		.select({ sequence: sealedRecords.sequence, sha256: sealedRecords.sha256, signedAt: sealedRecords.signedAt })
		.from(sealedRecords)
		.where(eq(sealedRecords.siteId, siteId))
		.orderBy(desc(sealedRecords.sequence))
		.limit(1);
	return newest ?? null;
}

async function hashesOf(db: Db): Promise<Map<string, string[]>> {
	const rows = await db
		.select({ siteId: sealedRecords.siteId, text: sealedRecords.text })
		.from(sealedRecords)
		.orderBy(asc(sealedRecords.siteId), asc(sealedRecords.sequence));
	const hashes = new Map<string, string[]>();
	// Of the text itself: a row whose text was changed beside its hash must differ.
	for (const { siteId, text } of rows) {
		const own = hashes.get(siteId) ?? [];
		own.push(createHash('sha256').update(text, 'utf8').digest('hex'));
		hashes.set(siteId, own);
	}
	return hashes;
}
