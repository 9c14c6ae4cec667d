import { writeAuditCsv } from '#shared/record/write-audit-csv.ts';
import { siteRoutes } from '../../platform/guard.ts';
import { auditOf } from './list-audit.ts';

const pageEntries = 100;
/** A file beyond this is cut short, and its name says so: the newest are in it. */
const fileEntries = 20_000;

export const recordRoutes = {
	audit: siteRoutes.record.audit.handler(({ input: { olderThan, ...filter }, context: { platform, member } }) =>
		auditOf(platform.db, member, filter, { olderThan, most: pageEntries }),
	),
	auditCsv: siteRoutes.record.auditCsv.handler(async ({ input: filter, context: { platform, member } }) => {
		const { entries, hasOlder } = await auditOf(platform.db, member, filter, { olderThan: null, most: fileEntries });
		const day = platform.now().toISOString().slice(0, 10);
		return new File([writeAuditCsv(entries)], `audit-${day}${hasOlder ? '-newest' : ''}.csv`, { type: 'text/csv' });
	}),
};
