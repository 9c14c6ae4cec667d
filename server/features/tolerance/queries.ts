import { and, desc, eq } from 'drizzle-orm';
import type { SheetSummary } from '#shared/tolerance/contract.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Handle } from '../../db/database.ts';
import { users } from '../../db/schema/account.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { foundOne } from '../../platform/refuse.ts';

const rowsOf = (db: Handle) => db.select({ row: sheets, issuedBy: users.name }).from(sheets).leftJoin(users, eq(users.id, sheets.issuedBy));

/** The site's sheets, newest first. */
export async function sheetsOf(db: Handle, siteId: string): Promise<SheetSummary[]> {
	const rows = await rowsOf(db).where(eq(sheets.siteId, siteId)).orderBy(desc(sheets.revision));
	return rows.map(summaryOf);
}

/** One sheet of the site with its rules; NOT_FOUND for another site's. */
export async function sheetOf(
	db: Handle,
	siteId: string,
	sheetId: string,
): Promise<SheetSummary & { sheet: ToleranceSheet; contentSha256: string; issueReason: string | null }> {
	const found = foundOne(await rowsOf(db).where(and(eq(sheets.siteId, siteId), eq(sheets.id, sheetId))));
	const { sheet, contentSha256, issueReason } = found.row;
	return { ...summaryOf(found), sheet, contentSha256, issueReason };
}

function summaryOf({ row, issuedBy }: { row: typeof sheets.$inferSelect; issuedBy: string | null }): SheetSummary {
	return {
		sheetId: row.id,
		name: row.name,
		revision: row.revision,
		state: row.state,
		decision: row.sheet.decision,
		ruleCount: row.sheet.rules.length,
		issuedBy,
		issuedAt: row.issuedAt,
	};
}
