/** What a table shows, line by line: heads of groups and rows. Pure. */

export interface RowGroup<Row> {
	key: string;
	rows: readonly Row[];
}

export type TableLine<Row, Group extends RowGroup<Row>> =
	| { kind: 'group'; key: string; group: Group }
	| { kind: 'row'; key: string; row: Row };

/** Which column orders the rows, and which way. */
export interface Sorting {
	key: string;
	isDescending: boolean;
}

/** What a row is ordered by; null goes last either way. */
export type SortValue = number | string | null;

/** Orders rows by a value, stable; nulls last both ways. */
export function sortedRows<Row>(rows: readonly Row[], orderBy: (row: Row) => SortValue, isDescending: boolean): Row[] {
	const sign = isDescending ? -1 : 1;
	return rows
		.map((row, index) => ({ row, index, value: orderBy(row) }))
		.sort((a, b) => {
			if (a.value === null || b.value === null) return a.value === b.value ? a.index - b.index : a.value === null ? 1 : -1;
			return sign * compare(a.value, b.value) || a.index - b.index;
		})
		.map(({ row }) => row);
}

/** Orders groups by their first row after each was ordered in itself. */
export function sortedGroups<Row, Group extends RowGroup<Row>>(
	groups: readonly Group[],
	orderBy: (row: Row) => SortValue,
	isDescending: boolean,
): Group[] {
	const inside = groups.map((group) => ({ ...group, rows: sortedRows(group.rows, orderBy, isDescending) }));
	return sortedRows(inside, (group) => (group.rows[0] === undefined ? null : orderBy(group.rows[0])), isDescending);
}

/** "10" after "9", and letters by the alphabet. */
function compare(a: number | string, b: number | string): number {
	return typeof a === 'number' && typeof b === 'number' ? a - b : String(a).localeCompare(String(b), 'en', { numeric: true });
}

/** Groups laid out with their heads; an empty group keeps its head. */
export function linesOf<Row, Group extends RowGroup<Row>>(groups: readonly Group[], keyOf: (row: Row) => string): TableLine<Row, Group>[] {
	return groups.flatMap((group) => [
		{ kind: 'group' as const, key: `group ${group.key}`, group },
		...group.rows.map((row) => ({ kind: 'row' as const, key: keyOf(row), row })),
	]);
}

/** The row a key leads to from line `from`, jumping over heads; the same line where there is none. */
export function rowLineFrom(lines: readonly { kind: 'group' | 'row' }[], from: number, key: string, pageRows: number): number | null {
	const rowIndices = lines.flatMap((line, index) => (line.kind === 'row' ? [index] : []));
	if (rowIndices.length === 0) return null;
	const at = rowIndices.indexOf(from);
	const last = rowIndices.length - 1;
	const steps: Record<string, number> = {
		ArrowDown: at + 1,
		ArrowUp: at < 0 ? 0 : at - 1,
		PageDown: at + pageRows,
		PageUp: at - pageRows,
		Home: 0,
		End: last,
	};
	const step = steps[key];
	return step === undefined ? null : (rowIndices[Math.max(0, Math.min(last, step))] ?? null);
}
