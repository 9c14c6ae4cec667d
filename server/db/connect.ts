import type { Connection } from './connection.ts';
import { openEmbedded } from './embedded.ts';
import { openPostgres } from './postgres.ts';

/** The database of this program: a PostgreSQL server where one is named, else the embedded one in the data folder. */
export function connectDatabase({ databaseUrl, dataDir }: { databaseUrl: string | null; dataDir: string }): Promise<Connection> {
	return databaseUrl === null ? openEmbedded(dataDir) : openPostgres(databaseUrl);
}
