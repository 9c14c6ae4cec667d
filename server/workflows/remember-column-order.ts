import { eq } from 'drizzle-orm';
import type { PointTableReading } from '#shared/survey/point-table-schema.ts';
import type { Transaction } from '../db/database.ts';
import { sites } from '../db/schema/site.ts';

/** Keeps on the site what a person said of a file without header: easting first or northing first. Files that tell it themselves change nothing. */
export async function rememberColumnOrder(tx: Transaction, siteId: string, { hasHeader, columns }: PointTableReading): Promise<void> {
	const { easting, northing } = columns;
	if (hasHeader || easting === undefined || northing === undefined) return;
	await tx
		.update(sites)
		.set({ columnOrder: easting < northing ? 'PENZD' : 'PNEZD' })
		.where(eq(sites.id, siteId));
}
