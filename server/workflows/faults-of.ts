import type { RowFault } from '#shared/survey/point-table-schema.ts';

/** What a route answers of a file with faults: a sentence with the counts, and enough of the faults to put them right by. */
export function faultsOf({ rowCount, faults, faultCount }: { rowCount: number; faults: readonly RowFault[]; faultCount: number }) {
	const [first] = faults;
	const message =
		rowCount === 0 && first !== undefined
			? `${first.message} Nothing was stored.`
			: `${faultCount} ${faultCount === 1 ? 'row' : 'rows'} of ${rowCount} cannot be read; nothing was stored.`;
	return { message, data: { rowCount, faults: faults.slice(0, 200) } };
}
