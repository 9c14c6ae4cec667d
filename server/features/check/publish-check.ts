import { and, eq } from 'drizzle-orm';
import type { Handle, Transaction } from '../../db/database.ts';
import { checkFits, checks, type PublishedAct } from '../../db/schema/check.ts';
import { fits } from '../../db/schema/fit.ts';
import { broughtPoints } from '../../db/schema/flag.ts';
import { companies } from '../../db/schema/site.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { audit } from '../../platform/audit.ts';
import type { Member } from '../../platform/platform.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';

type CheckRow = typeof checks.$inferSelect;

/** The site's check; NOT_FOUND for another's. */
export async function checkOf(db: Handle, siteId: string, checkId: string): Promise<CheckRow> {
	return foundOne(
		await db
			.select()
			.from(checks)
			.where(and(eq(checks.siteId, siteId), eq(checks.id, checkId))),
	);
}

/** Why this check cannot be published now, in a sentence; null: it can. A check stands on adopted fits and on the issued sheet. */
export async function whyNotPublished(db: Handle, check: CheckRow): Promise<{ code: string; message: string } | null> {
	if (check.state === 'published') return { code: 'already-published', message: `Check ${check.number} is published already.` };
	if (check.state !== 'trial') {
		const why = check.state === 'withdrawn' ? 'was withdrawn; run it again' : check.state === 'failed' ? 'failed' : 'is still computing';
		return { code: 'not-a-trial', message: `Check ${check.number} ${why}.` };
	}
	const brought = await db
		.select({ companyName: companies.name })
		.from(broughtPoints)
		.innerJoin(companies, eq(companies.id, broughtPoints.companyId))
		.where(and(eq(broughtPoints.siteId, check.siteId), eq(broughtPoints.surveyId, check.surveyId)));
	if (brought[0] !== undefined)
		return {
			code: 'brought-points',
			message: `Its survey holds points that ${brought[0].companyName} brought: they are shown beside the flag they were brought to, and take no measurement’s place.`,
		};
	const used = await db
		.select({ state: fits.state })
		.from(checkFits)
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.where(eq(checkFits.checkId, check.id));
	if (used.some(({ state }) => state !== 'adopted'))
		return {
			code: 'fit-not-adopted',
			message: 'A fit that it rests on is adopted no more. Run the check again on the newest, then publish that.',
		};
	const [sheet] = await db.select({ state: sheets.state, revision: sheets.revision }).from(sheets).where(eq(sheets.id, check.sheetId));
	if (sheet?.state !== 'issued')
		return {
			code: 'sheet-not-issued',
			message: `Revision ${sheet?.revision ?? ''} of the tolerance sheet is superseded. Run the check again by the issued one.`,
		};
	return null;
}

/** From trial to published; REFUSED where it cannot be, CONFLICT where someone was quicker. */
export async function publishCheck(tx: Transaction, member: Member, checkId: string, answerBy: Date, now: Date): Promise<CheckRow> {
	const check = await checkOf(tx, member.siteId, checkId);
	const refusal = await whyNotPublished(tx, check);
	if (refusal !== null) throw new Refused(refusal.code, refusal.message, 'checkId');
	const published = await tx
		.update(checks)
		.set({ state: 'published', publishedBy: member.userId, publishedAt: now, answerBy })
		.where(and(eq(checks.id, checkId), eq(checks.state, 'trial')))
		.returning();
	if (published.length === 0) throw new Conflict();
	await audit(tx, member, {
		kind: 'check-published',
		subjectId: checkId,
		data: { number: check.number, answerBy, inputsSha256: check.inputsSha256 },
	});
	return foundOne(published);
}

/** Keeps what publishing did to the flags, so that it can be taken back. */
export async function rememberPublishing(tx: Transaction, checkId: string, publishedAct: PublishedAct): Promise<void> {
	await tx.update(checks).set({ publishedAct }).where(eq(checks.id, checkId));
}

/** From published to trial again; CONFLICT where someone was quicker. Whether it may be is the caller's to know. */
export async function unpublishCheck(tx: Transaction, member: Member, { id, number }: CheckRow): Promise<void> {
	const taken = await tx
		.update(checks)
		.set({ state: 'trial', publishedBy: null, publishedAt: null, answerBy: null, publishedAct: null })
		.where(and(eq(checks.id, id), eq(checks.state, 'published'), eq(checks.publishedBy, member.userId)))
		.returning({ id: checks.id });
	if (taken.length === 0) throw new Conflict();
	await audit(tx, member, { kind: 'check-taken-back', subjectId: id, data: { number } });
}

/** From published to withdrawn, for good; REFUSED where it is not published, CONFLICT where someone was quicker. */
export async function withdrawCheck(tx: Transaction, member: Member, checkId: string, reason: string, now: Date): Promise<CheckRow> {
	const check = await checkOf(tx, member.siteId, checkId);
	if (check.state === 'withdrawn') throw new Conflict(`Check ${check.number} was withdrawn already: ${check.withdrawnReason}`);
	if (check.state !== 'published')
		throw new Refused('not-published', `Check ${check.number} is not published, so nothing is to be withdrawn.`, 'checkId');
	const withdrawn = await tx
		.update(checks)
		.set({ state: 'withdrawn', withdrawnBy: member.userId, withdrawnAt: now, withdrawnReason: reason })
		.where(and(eq(checks.id, checkId), eq(checks.state, 'published')))
		.returning();
	if (withdrawn.length === 0) throw new Conflict();
	await audit(tx, member, { kind: 'check-withdrawn', subjectId: checkId, data: { number: check.number, reason } });
	return foundOne(withdrawn);
}
