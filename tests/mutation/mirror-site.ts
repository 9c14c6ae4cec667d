import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import type { Db } from '../../server/db/database.ts';

const uuid = /[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}/g;
/** People and what is theirs stand on no site. */
const notOfSites = new Set(['sites', 'users', 'sessions', 'totps', 'passkeys', 'mails', 'signing_keys', 'files']);

/**
 * Copies everything of one site onto another under new ids, on the embedded database: both then hold the same, so that a query which forgets
 * its site answers twice as much. Answers the new id of each old one.
 */
export async function mirrorSite(db: Db, fromSiteId: string, toSiteId: string): Promise<Map<string, string>> {
	const renamed = new Map([[fromSiteId, toSiteId]]);
	const { rows: tables } = (await db.execute(sql`
		select t.table_name as name, bool_or(c.column_name = 'site_id') as "isOfSite"
		from information_schema.tables t join information_schema.columns c using (table_schema, table_name)
		where t.table_schema = 'public' and t.table_type = 'BASE TABLE' group by 1`)) as unknown as {
		rows: { name: string; isOfSite: boolean }[];
	};
	const texts = new Map<string, string[]>();
	// What hangs from a thing of the site without naming the site comes after it.
	for (const { name, isOfSite } of tables.toSorted((a, b) => Number(b.isOfSite) - Number(a.isOfSite))) {
		if (notOfSites.has(name)) continue;
		const where = isOfSite ? sql`where t.site_id = ${fromSiteId}` : sql``;
		const { rows } = (await db.execute(sql`select to_jsonb(t)::text as text from ${sql.identifier(name)} t ${where}`)) as unknown as {
			rows: { text: string }[];
		};
		const own = rows.map(({ text }) => text).filter((text) => isOfSite || text.match(uuid)?.some((id) => renamed.has(id)));
		for (const text of own) {
			const { id } = JSON.parse(text) as { id?: unknown };
			if (typeof id === 'string' && id.match(uuid)?.[0] === id) renamed.set(id, randomUUID());
		}
		texts.set(name, own);
	}
	await db.execute(sql`set session_replication_role = replica`);
	for (const [name, rows] of texts) {
		const mirrored = rows.map((text) => text.replaceAll(uuid, (id) => renamed.get(id) ?? id));
		for (let i = 0; i < mirrored.length; i += 500)
			await db.execute(sql`insert into ${sql.identifier(name)}
				select (jsonb_populate_record(null::${sql.identifier(name)}, one)).* from jsonb_array_elements(${`[${mirrored.slice(i, i + 500).join(',')}]`}::jsonb) one
				on conflict do nothing`);
	}
	await db.execute(sql`set session_replication_role = default`);
	return renamed;
}
