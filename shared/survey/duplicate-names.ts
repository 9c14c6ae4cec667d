import { pointNameKey } from './point-name.ts';
import type { PointRow } from './read-point-table.ts';

export interface DuplicateName {
	/** As first written. */
	readonly name: string;
	readonly rows: readonly number[];
}

/**
 * Names that stand more than once, in any spelling that counts as the same. In a set-up they are repeats; in control, where a mark has one
 * position, they are faults. In the order of their first rows.
 */
export function duplicateNames(rows: readonly Pick<PointRow, 'row' | 'name'>[]): DuplicateName[] {
	const first = new Map<string, number>();
	const repeated = new Map<string, { name: string; rows: number[] }>();
	for (let index = 0; index < rows.length; index++) {
		const { name, row } = rows[index]!;
		const key = pointNameKey(name);
		const earlier = first.get(key);
		if (earlier === undefined) {
			first.set(key, index);
			continue;
		}
		const entry = repeated.get(key);
		if (entry) entry.rows.push(row);
		else repeated.set(key, { name: rows[earlier]!.name, rows: [rows[earlier]!.row, row] });
	}
	return [...repeated.values()].sort((a, b) => a.rows[0]! - b.rows[0]!);
}
