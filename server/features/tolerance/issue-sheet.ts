import { and, eq, max } from 'drizzle-orm';
import { sha256OfJson } from '#shared/record/sha256.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { audit } from '../../platform/audit.ts';
import type { Member } from '../../platform/platform.ts';
import { requireSecondFactor } from '../../platform/second-factor.ts';

/** A sheet with the hash of its canonical text, made before the transaction. */
export interface SheetToIssue {
	sheetId: string;
	sheet: ToleranceSheet;
	contentSha256: string;
}

/** Hashes the sheet's content: what a check names as the limits it used. */
export async function sheetToIssue(sheetId: string, sheet: ToleranceSheet): Promise<SheetToIssue> {
	return { sheetId, sheet, contentSha256: await sha256OfJson(sheet) };
}

/** Issues a sheet as the site's next revision; the one issued before is superseded, never edited. */
export async function issueSheet(tx: Transaction, member: Member, toIssue: SheetToIssue, issueReason: string, now: Date): Promise<void> {
	const { siteId } = member;
	await requireSecondFactor(tx, member);
	await tx
		.update(sheets)
		.set({ state: 'superseded' })
		.where(and(eq(sheets.siteId, siteId), eq(sheets.state, 'issued')));
	const [row] = await tx
		.select({ highest: max(sheets.revision) })
		.from(sheets)
		.where(eq(sheets.siteId, siteId));
	const revision = (row?.highest ?? 0) + 1;
	const { sheetId, sheet, contentSha256 } = toIssue;
	await tx.insert(sheets).values({
		id: sheetId,
		siteId,
		name: sheet.name,
		revision,
		state: 'issued',
		sheet,
		contentSha256,
		issueReason,
		issuedBy: member.userId,
		issuedAt: now,
	});
	await audit(tx, member, { kind: 'sheet-issued', subjectId: sheetId, data: { name: sheet.name, revision, contentSha256, issueReason } });
}
