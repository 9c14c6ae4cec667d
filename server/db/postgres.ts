import { drizzle } from 'drizzle-orm/node-postgres';
import { migrate } from 'drizzle-orm/node-postgres/migrator';
import pg from 'pg';
import type { Connection, ExecuteSql } from './connection.ts';
import { migrationsFolder } from './migrations-folder.ts';

/** Held while migrating, so that two programs started together do not both create the same table. */
const MIGRATION_LOCK = 7_206_101;
/** Held by the running server: what it does at its start to jobs left over holds only where there is no other. */
const SERVER_LOCK = 7_206_102;

/** A PostgreSQL server. Throws a plain sentence where it does not answer or another Batterboard is on it. */
export async function openPostgres(connectionString: string): Promise<Connection> {
	const keeper = await reach(connectionString);
	try {
		const held = await keeper.query<{ got: boolean }>('select pg_try_advisory_lock($1) as got', [SERVER_LOCK]);
		if (!held.rows[0]?.got) throw new Error('The database that DATABASE_URL names is in use by another Batterboard. Stop that one first.');
		const connection = await connectPostgres(connectionString);
		return {
			...connection,
			close: async () => {
				await connection.close();
				await keeper.end();
			},
		};
	} catch (error) {
		await keeper.end();
		throw error;
	}
}

/** Migrates, then answers a pool. Without the server's own lock: for scripts and tests. */
export async function connectPostgres(connectionString: string): Promise<Connection> {
	const migrating = await reach(connectionString);
	try {
		await migrating.query('select pg_advisory_lock($1)', [MIGRATION_LOCK]);
		await migrate(drizzle(migrating), { migrationsFolder: migrationsFolder() });
	} finally {
		await migrating.end();
	}
	const pool = new pg.Pool({ connectionString, max: 10 });
	// A connection that dies while idle must not end the process; the next query gets another.
	pool.on('error', (error) => console.error(`The database dropped a connection: ${error.message}`));
	return { db: drizzle(pool), executeSql: executeSqlOn(pool), close: () => pool.end() };
}

async function reach(connectionString: string): Promise<pg.Client> {
	const client = new pg.Client({ connectionString });
	client.on('error', (error) => console.error(`The database dropped a connection: ${error.message}`));
	try {
		await client.connect();
	} catch (error) {
		throw new Error(`The database that DATABASE_URL names does not answer: ${error instanceof Error ? error.message : String(error)}`, {
			cause: error,
		});
	}
	return client;
}

function executeSqlOn(pool: pg.Pool): ExecuteSql {
	return async (text, values) => {
		const client = await pool.connect();
		try {
			// Many statements answer with many results, whatever the types say.
			const answer: pg.QueryResult | pg.QueryResult[] =
				values === undefined || values.length === 0 ? await client.query(text) : await client.query(text, values);
			return { rows: (Array.isArray(answer) ? answer.at(-1)?.rows : answer.rows) ?? [] };
		} catch (error) {
			if (/\bbegin\b/i.test(text)) await client.query('rollback');
			throw error;
		} finally {
			client.release();
		}
	};
}
