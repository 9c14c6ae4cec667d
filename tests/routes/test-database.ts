import { randomBytes } from 'node:crypto';
import { readFileSync } from 'node:fs';
import pg from 'pg';
import { inject } from 'vitest';
import type { Connection } from '../../server/db/connection.ts';
import { connectEmbedded } from '../../server/db/embedded.ts';
import { connectPostgres } from '../../server/db/postgres.ts';

/** A migrated database of this test file's own, on the database of the project that runs it. */
export async function openTestDatabase(): Promise<Connection> {
	const template = inject('databaseTemplate');
	if (process.env.TEST_DATABASE !== 'postgres') {
		return connectEmbedded({ loadDataDir: new Blob([new Uint8Array(readFileSync(template))]) });
	}
	const name = `test_${randomBytes(6).toString('hex')}`;
	const client = new pg.Client({ connectionString: `${template}/postgres` });
	await client.connect();
	await client.query(`create database ${name} template template`);
	await client.end();
	return connectPostgres(`${template}/${name}`);
}
