import { getTableColumns, getTableName, type InferInsertModel, sql } from 'drizzle-orm';
import type { PgTable } from 'drizzle-orm/pg-core';
import type { Transaction } from './database.ts';

/** On the embedded database a statement holds the event loop: 10 000 rows are about 0.1 s. */
const rowsPerSlice = 10_000;

/**
 * Inserts any number of rows in slices, one statement each: `insert … select from unnest(…)`, because a row's own parameters would
 * run out at 65 534. Every column travels as text and is cast to its type; JavaScript's shortest text of a double reads back to
 * the same double. Columns that a row leaves out are null, not their default.
 */
export async function insertRows<Table extends PgTable>(
	tx: Transaction,
	table: Table,
	rows: readonly InferInsertModel<Table>[],
): Promise<void> {
	const columns = Object.entries(getTableColumns(table));
	const names = sql.join(
		columns.map(([, column]) => sql.identifier(column.name)),
		sql`, `,
	);
	const values = sql.join(
		columns.map(([, column], index) => sql.raw(`"v${index}"::${column.getSQLType()}`)),
		sql`, `,
	);
	const aliases = sql.raw(columns.map((_, index) => `"v${index}"`).join(', '));
	for (let from = 0; from < rows.length; from += rowsPerSlice) {
		const slice = rows.slice(from, from + rowsPerSlice) as readonly Record<string, unknown>[];
		const arrays = sql.join(
			columns.map(([key, column]) => {
				const isJson = column.getSQLType() === 'jsonb';
				return sql`${sql.param(slice.map((row) => asText(row[key], isJson)))}::text[]`;
			}),
			sql`, `,
		);
		await tx.execute(
			sql`insert into ${sql.identifier(getTableName(table))} (${names}) select ${values} from unnest(${arrays}) as rows(${aliases})`,
		);
	}
}

function asText(value: unknown, isJson: boolean): string | null {
	if (value === null || value === undefined) return null;
	if (isJson) return JSON.stringify(value);
	if (value instanceof Date) return value.toISOString();
	if (Array.isArray(value)) return `{${value.map((entry) => asListEntry(entry)).join(',')}}`;
	return String(value);
}

function asListEntry(entry: unknown): string {
	return typeof entry === 'number' ? String(entry) : `"${String(entry).replaceAll('\\', '\\\\').replaceAll('"', '\\"')}"`;
}
