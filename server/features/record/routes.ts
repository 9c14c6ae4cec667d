import { writeAuditCsv } from '#shared/record/write-audit-csv.ts';
import { openRoutes, siteRoutes } from '../../platform/guard.ts';
import { auditOf } from './list-audit.ts';
import { chainTextOf, publishedKeys, recordOf, recordsOf } from './sealed-records.ts';

const pageEntries = 100;
/** A file beyond this is cut short, and its name says so: the newest are in it. */
const fileEntries = 20_000;

export const recordRoutes = {
	keys: openRoutes.record.keys.handler(({ context: { platform } }) => publishedKeys(platform.db)),
	list: siteRoutes.record.list.handler(({ context: { platform, member } }) => recordsOf(platform.db, member)),
	get: siteRoutes.record.get.handler(({ input, context: { platform, member } }) => recordOf(platform.db, member, input.recordId)),
	chain: siteRoutes.record.chain.handler(async ({ context: { platform, member } }) => {
		const { text, length } = await chainTextOf(platform.db, member);
		return new File([text], `records-1-to-${length}.json`, { type: 'application/json' });
	}),
	audit: siteRoutes.record.audit.handler(({ input: { olderThan, ...filter }, context: { platform, member } }) =>
		auditOf(platform.db, member, filter, { olderThan, most: pageEntries }),
	),
	auditCsv: siteRoutes.record.auditCsv.handler(async ({ input: filter, context: { platform, member } }) => {
		const { entries, hasOlder } = await auditOf(platform.db, member, filter, { olderThan: null, most: fileEntries });
		const day = platform.now().toISOString().slice(0, 10);
		return new File([writeAuditCsv(entries)], `audit-${day}${hasOlder ? '-newest' : ''}.csv`, { type: 'text/csv' });
	}),
};
