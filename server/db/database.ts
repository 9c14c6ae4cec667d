import type { PgDatabase, PgQueryResultHKT } from 'drizzle-orm/pg-core';

/** One type for both drivers. Inside a transaction use only its handle: touching the outer database waits for ever on the embedded one. */
export type Db = PgDatabase<PgQueryResultHKT, Record<string, never>>;
export type Transaction = Parameters<Parameters<Db['transaction']>[0]>[0];
/** What a query needs: either. */
export type Handle = Db | Transaction;
