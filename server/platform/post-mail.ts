import { randomUUID } from 'node:crypto';
import type { Transaction } from '../db/database.ts';
import { mails } from '../db/schema/mail.ts';
import type { Letter } from './letter.ts';
import { htmlOf, textOf } from './letter.ts';

/**
 * Puts a letter into the outbox inside the transaction that calls for it: no act without its mail, no mail of a rollback. `isVoid`: the
 * same work for a letter to nobody, so that who asks cannot tell from the time whether an address is known.
 */
export async function postMail(
	tx: Transaction,
	{ to, letter, now, isVoid = false }: { to: string; letter: Letter; now: Date; isVoid?: boolean },
): Promise<void> {
	await tx.insert(mails).values({
		id: randomUUID(),
		toAddress: isVoid ? 'nobody' : to,
		subject: letter.subject,
		text: isVoid ? null : textOf(letter),
		html: isVoid ? null : htmlOf(letter),
		state: isVoid ? 'void' : 'waiting',
		tries: 0,
		dueAt: now,
		lastFault: null,
		createdAt: now,
		endedAt: isVoid ? now : null,
	});
}
