import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { PGlite } from '@electric-sql/pglite';
import { drizzle } from 'drizzle-orm/pglite';
import { migrate } from 'drizzle-orm/pglite/migrator';
import pg from 'pg';
import type { TestProject } from 'vitest/node';
import { migrationsFolder } from '../../server/db/migrations-folder.ts';
import { connectPostgres } from '../../server/db/postgres.ts';
import { startPostgres } from './postgres-server.ts';

declare module 'vitest' {
	interface ProvidedContext {
		/** A file with a migrated embedded database, or the address of a PostgreSQL server that has the database `template`. */
		databaseTemplate: string;
	}
}

/** Migrates once a run; each test file gets a copy. */
export default async function prepareTemplate(project: TestProject): Promise<() => void> {
	return project.name === 'postgres' ? onPostgres(project) : onPglite(project);
}

async function onPglite(project: TestProject): Promise<() => void> {
	const folder = mkdtempSync(join(tmpdir(), 'bb-template-'));
	const client = await PGlite.create();
	await migrate(drizzle(client), { migrationsFolder: migrationsFolder() });
	const dump = await client.dumpDataDir('none');
	await client.close();
	const file = join(folder, 'template.tar');
	writeFileSync(file, new Uint8Array(await dump.arrayBuffer()));
	project.provide('databaseTemplate', file);
	return () => rmSync(folder, { recursive: true, force: true });
}

async function onPostgres(project: TestProject): Promise<() => void> {
	const server = await startPostgres();
	const client = new pg.Client({ connectionString: `${server.url}/postgres` });
	await client.connect();
	await client.query('create database template');
	await client.end();
	const connection = await connectPostgres(`${server.url}/template`);
	await connection.close();
	project.provide('databaseTemplate', server.url);
	return () => server.stop();
}
