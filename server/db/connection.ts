import { sql } from 'drizzle-orm';
import type { Db, Transaction } from './database.ts';

/** An open, migrated database. */
export interface Connection {
	db: Db;
	/** Text as pg-boss writes it: one statement with `$1…`, or many without values. A failed `begin … commit` is rolled back here. */
	executeSql: ExecuteSql;
	close: () => Promise<void>;
}

/** What a column holds is the caller's to know. */
export type ExecuteSql = (text: string, values?: unknown[]) => Promise<{ rows: Record<string, unknown>[] }>;

/** The same inside a transaction of ours: gone after its rollback, there after its commit. Arrays are sent as one value, not spread. */
export function executeSqlIn(tx: Transaction): ExecuteSql {
	return async (text, values = []) => {
		const query = sql.empty();
		text.split(/\$(\d+)/).forEach((part, index) => {
			query.append(index % 2 === 0 ? sql.raw(part) : sql`${sql.param(values[Number(part) - 1])}`);
		});
		const result: unknown = await tx.execute(query);
		return { rows: rowsOf(result) };
	};
}

/** Both drivers answer `{ rows }`; the shared type does not know it. */
export function rowsOf(result: unknown): Record<string, unknown>[] {
	if (typeof result === 'object' && result !== null && 'rows' in result && Array.isArray(result.rows)) return result.rows;
	throw new Error('The database driver answered in an unknown shape.');
}
