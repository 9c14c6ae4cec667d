import { and, asc, eq, inArray, lte, sql } from 'drizzle-orm';
import type { Db } from '../db/database.ts';
import { mails } from '../db/schema/mail.ts';
import { MailRefused, type MailService } from './mail.ts';

/** After a try that failed. Together shorter than the day for which services keep idempotency keys. */
const pausesMs = [10_000, 60_000, 300_000, 1_800_000, 7_200_000, 14_400_000];
/** A sending that takes longer belongs to a process that is no more. */
const leaseMs = 120_000;
const lookMs = 1_500;

export interface Postman {
	/** Begins to look into the outbox. */
	start: () => void;
	/** Takes no more, and waits for what is being sent. Before the database closes. */
	stop: () => Promise<void>;
}

interface PostmanParts {
	db: Db;
	service: MailService | null;
	/** Writes into the outbox what has come due meanwhile; before each look. */
	beforeLook?: () => Promise<unknown>;
	now: () => Date;
}

/** Sends what the outbox holds, one after the other. Without a service nothing is sent, and what waits goes on waiting. */
export function openPostman({ db, service, beforeLook, now }: PostmanParts): Postman {
	let isStopped = false;
	let round: Promise<void> = Promise.resolve();
	let timer: ReturnType<typeof setTimeout> | undefined;
	const look = (mailService: MailService) => {
		round = Promise.resolve(beforeLook?.())
			.then(() => deliverDue({ db, service: mailService, now }, () => isStopped))
			.then(() => undefined)
			.catch((error: unknown) => {
				if (!isStopped) console.error('The outbox could not be worked on:', error);
			})
			.finally(() => {
				if (!isStopped) timer = setTimeout(look, lookMs, mailService);
			});
	};
	return {
		start: () => {
			if (service !== null) look(service);
		},
		stop: async () => {
			isStopped = true;
			clearTimeout(timer);
			await round;
		},
	};
}

/** Sends all that is due and answers how many were taken by the service. Each is claimed first, so that two processes never send the same. */
export async function deliverDue(
	{ db, service, now }: { db: Db; service: MailService; now: () => Date },
	isStopped: () => boolean = () => false,
): Promise<number> {
	let sent = 0;
	await settleInterrupted(db, service, now());
	while (!isStopped()) {
		const mail = await claimNext(db, now());
		if (mail === null) return sent;
		const outcome = await service
			.send({ mailId: mail.id, to: mail.toAddress, subject: mail.subject, text: mail.text ?? '', html: mail.html ?? '' })
			.then(() => null)
			.catch((error: unknown) => (error instanceof Error ? error : new Error(String(error))));
		await note(db, mail, outcome, now());
		if (outcome === null) sent += 1;
	}
	return sent;
}

/** What a process that died left being sent: again where the service sends the same once, else never. */
async function settleInterrupted(db: Db, service: MailService, now: Date): Promise<void> {
	const lapsed = and(eq(mails.state, 'sending'), lte(mails.dueAt, now));
	if (service.isIdempotent) await db.update(mails).set({ state: 'waiting' }).where(lapsed);
	else {
		const lastFault = 'The server ended while the mail server had it: perhaps sent, so not sent again.';
		await db.update(mails).set({ state: 'uncertain', lastFault, text: null, html: null, endedAt: now }).where(lapsed);
	}
}

async function claimNext(db: Db, now: Date) {
	const next = db
		.select({ id: mails.id })
		.from(mails)
		.where(and(eq(mails.state, 'waiting'), lte(mails.dueAt, now)))
		.orderBy(asc(mails.dueAt), asc(mails.createdAt))
		.limit(1)
		.for('update', { skipLocked: true });
	const [mail] = await db
		.update(mails)
		.set({ state: 'sending', tries: sql`${mails.tries} + 1`, dueAt: new Date(now.getTime() + leaseMs) })
		.where(inArray(mails.id, next))
		.returning();
	return mail ?? null;
}

async function note(db: Db, mail: { id: string; tries: number }, fault: Error | null, now: Date): Promise<void> {
	const mine = and(eq(mails.id, mail.id), eq(mails.state, 'sending'));
	if (fault === null) {
		await db.update(mails).set({ state: 'sent', text: null, html: null, lastFault: null, endedAt: now }).where(mine);
		return;
	}
	const pauseMs = pausesMs[mail.tries - 1];
	if (fault instanceof MailRefused || pauseMs === undefined) {
		console.error(`Mail ${mail.id} was given up: ${fault.message}`);
		await db.update(mails).set({ state: 'failed', text: null, html: null, lastFault: fault.message, endedAt: now }).where(mine);
		return;
	}
	const dueAt = new Date(now.getTime() + pauseMs);
	await db.update(mails).set({ state: 'waiting', dueAt, lastFault: fault.message }).where(mine);
}
