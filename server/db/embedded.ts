import { existsSync, readFileSync } from 'node:fs';
import { mkdir } from 'node:fs/promises';
import { join } from 'node:path';
import { PGlite, type PGliteOptions } from '@electric-sql/pglite';
import { drizzle } from 'drizzle-orm/pglite';
import { migrate } from 'drizzle-orm/pglite/migrator';
import type { Connection, ExecuteSql } from './connection.ts';
import { lockFolder } from './lock-folder.ts';
import { migrationsFolder } from './migrations-folder.ts';

/** The PostgreSQL inside the embedded database; a folder of another one cannot be opened. */
const POSTGRES_VERSION = '18';

/** The database in our own process, in `<dataDir>/db`, held by a lock on the data folder. Throws a plain sentence where the folder is in use or of another version. */
export async function openEmbedded(dataDir: string): Promise<Connection> {
	const unlock = await lockFolder(dataDir);
	try {
		const folder = join(dataDir, 'db');
		await mkdir(folder, { recursive: true });
		refuseOtherVersion(folder);
		const connection = await connectEmbedded({ dataDir: folder });
		return {
			...connection,
			close: async () => {
				await connection.close();
				await unlock();
			},
		};
	} catch (error) {
		await unlock();
		throw error;
	}
}

/** Without a lock: for what is in memory, as in tests. */
export async function connectEmbedded(options: PGliteOptions): Promise<Connection> {
	const client = await PGlite.create(options);
	const db = drizzle(client);
	await migrate(db, { migrationsFolder: migrationsFolder() });
	return { db, executeSql: executeSqlOn(client), close: () => client.close() };
}

function executeSqlOn(client: PGlite): ExecuteSql {
	return async (text, values) => {
		if (values !== undefined && values.length > 0) return client.query<Record<string, unknown>>(text, values);
		try {
			return { rows: (await client.exec(text)).at(-1)?.rows ?? [] };
		} catch (error) {
			// The one connection would stay in the failed transaction, and every later query would fail.
			if (/\bbegin\b/i.test(text)) await client.exec('rollback');
			throw error;
		}
	};
}

function refuseOtherVersion(folder: string): void {
	const file = join(folder, 'PG_VERSION');
	if (!existsSync(file)) return;
	const version = readFileSync(file, 'utf8').trim();
	if (version === POSTGRES_VERSION) return;
	throw new Error(
		`The data in ${folder} was written by PostgreSQL ${version}, and this Batterboard reads ${POSTGRES_VERSION}. Start the version that wrote it, or set DATA_DIR to another folder. Nothing was changed.`,
	);
}
