import { and, eq, max } from 'drizzle-orm';
import { crossedRules } from '#shared/check/weigh-sheet.ts';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { lockSite } from '../../db/lock-site.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Conflict, foundOne, Refused } from '../../platform/refuse.ts';
import { requireSecondFactor } from '../../platform/second-factor.ts';

type SheetRow = typeof sheets.$inferSelect;

/** REFUSED where a rule's lower limit is above its upper one, or two rules share a name: with the place. */
function expectSound(sheet: ToleranceSheet): void {
	const [crossed] = crossedRules(sheet);
	if (crossed !== undefined) {
		const { lowerMm, upperMm } = sheet.rules[crossed]!;
		throw new Refused(
			'limits-crossed',
			`Rule ${crossed + 1}: its lower limit (${lowerMm} mm) is above its upper one (${upperMm} mm). Nothing was stored.`,
			`rules.${crossed}.lower.first.value`,
		);
	}
	const ids = sheet.rules.map(({ id }) => id);
	const twice = ids.findIndex((id, index) => ids.indexOf(id) !== index);
	if (twice >= 0) throw new Refused('rule-twice', `Two rules are called "${ids[twice]}". Nothing was stored.`, `rules.${twice}.id`);
}

/** Keeps a draft, new or begun; CONFLICT where it was changed by another meanwhile. */
export async function saveDraft(
	platform: Platform,
	member: Member,
	{ sheetId, seenSha256, sheet }: { sheetId: string | null; seenSha256: string | null; sheet: ToleranceSheet },
): Promise<{ sheetId: string; contentSha256: string }> {
	expectSound(sheet);
	const contentSha256 = await sha256OfJson(sheet);
	const { siteId } = member;
	return platform.transaction(async (tx) => {
		await lockSite(tx, siteId);
		if (sheetId === null) {
			const newSheetId = platform.newId();
			const revision = (await highestRevision(tx, siteId)) + 1;
			const row = { id: newSheetId, siteId, name: sheet.name, revision, state: 'draft' as const, sheet, contentSha256 };
			await tx.insert(sheets).values(row);
			await audit(tx, member, { kind: 'sheet-drafted', subjectId: newSheetId, data: { name: sheet.name, revision, contentSha256 } });
			return { sheetId: newSheetId, contentSha256 };
		}
		const before = await draftOf(tx, siteId, sheetId);
		if (before.contentSha256 !== seenSha256)
			throw new Conflict('Someone changed this draft since you opened it, so nothing was stored. Open it again.');
		await tx
			.update(sheets)
			.set({ name: sheet.name, sheet, contentSha256 })
			.where(and(eq(sheets.id, sheetId), eq(sheets.state, 'draft')));
		const data = { name: sheet.name, before: before.contentSha256, after: contentSha256 };
		await audit(tx, member, { kind: 'sheet-draft-changed', subjectId: sheetId, data });
		return { sheetId, contentSha256 };
	});
}

/** A draft that is wanted no more is gone; what was issued never is. */
export async function discardDraft(platform: Platform, member: Member, sheetId: string): Promise<Record<string, never>> {
	await platform.transaction(async (tx) => {
		await lockSite(tx, member.siteId);
		const { name, revision, contentSha256 } = await draftOf(tx, member.siteId, sheetId);
		await tx.delete(sheets).where(and(eq(sheets.id, sheetId), eq(sheets.state, 'draft')));
		await audit(tx, member, { kind: 'sheet-draft-discarded', subjectId: sheetId, data: { name, revision, contentSha256 } });
	});
	return {};
}

/** From draft to issued, the one before superseded: exactly what was read, or CONFLICT. The site is locked by the caller. */
export async function issueDraft(
	tx: Transaction,
	member: Member,
	{ sheetId, seenSha256, reason }: { sheetId: string; seenSha256: string; reason: string },
	now: Date,
): Promise<{ revision: number }> {
	const { siteId } = member;
	await requireSecondFactor(tx, member);
	const draft = await draftOf(tx, siteId, sheetId);
	if (draft.contentSha256 !== seenSha256)
		throw new Conflict('Someone changed this draft since you read it, so it was not issued. Read it again.');
	expectSound(draft.sheet);
	if (draft.sheet.rules.length === 0) throw new Refused('no-rules', 'A sheet without a rule decides nothing. Add one, then issue it.');
	await tx
		.update(sheets)
		.set({ state: 'superseded' })
		.where(and(eq(sheets.siteId, siteId), eq(sheets.state, 'issued')));
	const highest = await highestRevision(tx, siteId);
	// Drafts are numbered when they are begun; what is issued is always the newest.
	const revision = draft.revision === highest ? draft.revision : highest + 1;
	await tx
		.update(sheets)
		.set({ state: 'issued', revision, issueReason: reason, issuedBy: member.userId, issuedAt: now })
		.where(and(eq(sheets.id, sheetId), eq(sheets.state, 'draft')));
	const data = { name: draft.name, revision, contentSha256: draft.contentSha256, issueReason: reason };
	await audit(tx, member, { kind: 'sheet-issued', subjectId: sheetId, data });
	return { revision };
}

async function draftOf(tx: Transaction, siteId: string, sheetId: string): Promise<SheetRow> {
	const row = foundOne(
		await tx
			.select()
			.from(sheets)
			.where(and(eq(sheets.siteId, siteId), eq(sheets.id, sheetId))),
	);
	if (row.state !== 'draft')
		throw new Refused(
			'not-a-draft',
			`Revision ${row.revision} is ${row.state}; what was issued is not edited. Begin a draft from it.`,
			'sheetId',
		);
	return row;
}

async function highestRevision(tx: Transaction, siteId: string): Promise<number> {
	const [row] = await tx
		.select({ highest: max(sheets.revision) })
		.from(sheets)
		.where(eq(sheets.siteId, siteId));
	return row?.highest ?? 0;
}
