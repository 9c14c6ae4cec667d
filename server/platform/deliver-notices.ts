import { and, asc, desc, eq, inArray, isNull, lte } from 'drizzle-orm';
import { defaultPreferences } from '#shared/account/preferences.ts';
import { noticeUrgencies, takeBackMs } from '#shared/mail/notice.ts';
import { beginOfWorkAfter } from '#shared/site/working-time.ts';
import type { Transaction } from '../db/database.ts';
import { users } from '../db/schema/account.ts';
import { notices } from '../db/schema/mail.ts';
import { sealedRecords } from '../db/schema/record.ts';
import { sites } from '../db/schema/site.ts';
import { memberOf } from './membership.ts';
import { noticeLetter } from './notice-letter.ts';
import type { Platform } from './platform.ts';
import { postMail } from './post-mail.ts';

const mostInARound = 500;

/**
 * Turns what is due into letters in the outbox: one a person and site, whatever came together. Who has left the site meanwhile is told
 * nothing more; who wishes no notices is told only what must be told at once. Answers how many letters were written. In one transaction, so that a notice is mailed once though the server dies in between.
 */
export async function deliverNotices({
	transaction,
	publicUrl,
	now,
}: Pick<Platform, 'transaction' | 'publicUrl' | 'now'>): Promise<number> {
	return transaction(async (tx) => {
		const at = now();
		const due = await tx
			.select()
			.from(notices)
			.where(and(isNull(notices.endedAt), lte(notices.leavesAt, at)))
			.orderBy(asc(notices.leavesAt))
			.limit(mostInARound)
			.for('update', { skipLocked: true });
		let letters = 0;
		for (const together of groupedByPerson(due)) letters += (await writeLetter(tx, together, publicUrl(), at)) ? 1 : 0;
		return letters;
	});
}

type Due = typeof notices.$inferSelect;

function groupedByPerson(due: readonly Due[]): Due[][] {
	const groups = new Map<string, Due[]>();
	for (const notice of due) {
		const key = `${notice.siteId} ${notice.userId}`;
		const group = groups.get(key);
		if (group === undefined) groups.set(key, [notice]);
		else group.push(notice);
	}
	return [...groups.values()];
}

async function writeLetter(tx: Transaction, together: Due[], publicUrl: string, now: Date): Promise<boolean> {
	const [{ siteId, userId }] = together as [Due];
	const [person] = await tx
		.select({ name: users.name, email: users.email, preferences: users.preferences })
		.from(users)
		.where(eq(users.id, userId));
	const [site] = await tx
		.select({ name: sites.name, timeZone: sites.timeZone, calendar: sites.calendar })
		.from(sites)
		.where(eq(sites.id, siteId));
	const isMember = person !== undefined && (await memberOf(tx, { userId, ...person }, siteId, now)) !== null;
	if (!isMember || site === undefined) {
		await end(tx, together, 'left-the-site', now);
		return false;
	}
	const wish = person.preferences?.notices ?? defaultPreferences.notices;
	const unwished = wish === 'none' ? together.filter(({ kind }) => noticeUrgencies[kind] !== 'now') : [];
	const gathered = wish === 'digest' ? together.filter(isToBeGathered) : [];
	await end(tx, unwished, 'not-wished', now);
	for (const { id, leavesAt } of gathered)
		await tx
			.update(notices)
			.set({ leavesAt: beginOfWorkAfter(leavesAt, site.calendar, site.timeZone) })
			.where(eq(notices.id, id));
	const due = together.filter((one) => !unwished.includes(one) && !gathered.includes(one));
	if (due.length === 0) return false;
	const isAlone = due.length === 1 && noticeUrgencies[due[0]!.kind] !== 'digest';
	const letter = noticeLetter({ siteName: site.name, notices: due, isAlone, head: await headOf(tx, siteId), publicUrl });
	await postMail(tx, { to: person.email, letter, now });
	await end(tx, due, 'mailed', now);
	return true;
}

/** Of the kinds that leave soon, and not put off to the morning yet. */
function isToBeGathered({ kind, createdAt, leavesAt }: Due): boolean {
	return noticeUrgencies[kind] === 'soon' && leavesAt.getTime() - createdAt.getTime() <= takeBackMs;
}

async function end(tx: Transaction, due: readonly Due[], how: 'mailed' | 'left-the-site' | 'not-wished', now: Date): Promise<void> {
	if (due.length === 0) return;
	const ids = due.map(({ id }) => id);
	await tx.update(notices).set({ endedAt: now, end: how }).where(inArray(notices.id, ids));
}

/** The newest record of the site's chain: whoever keeps it can prove later that nothing before it was changed. */
async function headOf(tx: Transaction, siteId: string): Promise<{ sequence: number; sha256: string } | null> {
	const [head] = await tx
		.select({ sequence: sealedRecords.sequence, sha256: sealedRecords.sha256 })
		.from(sealedRecords)
		.where(eq(sealedRecords.siteId, siteId))
		.orderBy(desc(sealedRecords.sequence))
		.limit(1);
	return head ?? null;
}
