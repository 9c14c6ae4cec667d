import { doublePrecision, text, timestamp, uuid } from 'drizzle-orm/pg-core';

/** Columns that many tables have, each with its one meaning. Ids are made in Node (PostgreSQL 15 has no uuidv7). */
export const id = () => uuid('id').primaryKey();
export const siteId = () => uuid('site_id').notNull();
export const at = (name: string) => timestamp(name, { withTimezone: true });
export const metres = (name: string) => doublePrecision(name);
export const millimetres = (name: string) => doublePrecision(name);
/** SHA-256 in lower-case hexadecimal. */
export const sha256 = (name: string) => text(name);
