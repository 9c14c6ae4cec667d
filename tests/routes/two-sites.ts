import { randomUUID } from 'node:crypto';
import { eq, getTableColumns, getTableName, is } from 'drizzle-orm';
import { PgTable } from 'drizzle-orm/pg-core';
import { contract } from '#shared/contract.ts';
import * as accountTables from '../../server/db/schema/account.ts';
import * as checkTables from '../../server/db/schema/check.ts';
import * as controlTables from '../../server/db/schema/control.ts';
import * as fileTables from '../../server/db/schema/file.ts';
import * as fitTables from '../../server/db/schema/fit.ts';
import * as flagTables from '../../server/db/schema/flag.ts';
import * as jobTables from '../../server/db/schema/job.ts';
import * as modelTables from '../../server/db/schema/model.ts';
import * as pourTables from '../../server/db/schema/pour.ts';
import * as recordTables from '../../server/db/schema/record.ts';
import * as siteTables from '../../server/db/schema/site.ts';
import { memberships, sites } from '../../server/db/schema/site.ts';
import * as surveyTables from '../../server/db/schema/survey.ts';
import * as toleranceTables from '../../server/db/schema/tolerance.ts';
import { seedDemo } from '../../server/scripts/seed.ts';
import { openTestServer, type TestServer } from './harness.ts';
import { routesOf, sampleInput, type WalkedRoute } from './sample-input.ts';

const tables = [
	accountTables,
	checkTables,
	controlTables,
	fileTables,
	fitTables,
	flagTables,
	jobTables,
	modelTables,
	pourTables,
	recordTables,
	siteTables,
	surveyTables,
	toleranceTables,
].flatMap((module) => Object.values(module).filter((one): one is PgTable => is(one, PgTable)));

export const callers = [
	'site-engineer',
	'project-engineer',
	'contractor',
	'owners-representative',
	'observer',
	'other-company',
	'nobody',
	'removed',
	'signed-out',
] as const;
export type Caller = (typeof callers)[number];

/** What an answer was: its code, 'done' or 'stream'; and the ids of the other site that stand in it though they were not sent. */
export interface Answer {
	code: string;
	status: number;
	leaked: string[];
	body: string;
}

export interface TwoSites {
	server: TestServer;
	/** The callers' own site, bare but for its people. */
	ownSiteId: string;
	/** A site with everything on it, of other people. */
	otherSiteId: string;
	/** Ids of the other site by the names that inputs give them. */
	foreignIds: Record<string, string>;
	routes: WalkedRoute[];
	ask: (route: WalkedRoute, caller: Caller, input: unknown) => Promise<Answer>;
	inputFor: (route: WalkedRoute, siteId: string, ids: Readonly<Record<string, string>>) => unknown;
}

/** Two sites on one server; the other is the demo's, made by the same commands that people use. */
export async function openTwoSites(): Promise<TwoSites> {
	const server = await openTestServer();
	const { db } = server.platform;
	await seedDemo(server.platform);
	const [other] = await db.select({ id: sites.id }).from(sites);
	const otherSiteId = other?.id ?? '';
	const ownSiteId = await server.addSite('Own yard');
	const [ours, theirs] = [await server.addCompany(ownSiteId, 'Ours'), await server.addCompany(ownSiteId, 'Theirs')];
	const cookies: Partial<Record<Caller, string>> = {};
	for (const role of ['site-engineer', 'project-engineer', 'owners-representative', 'observer'] as const)
		cookies[role] = (await server.addMember(ownSiteId, [role])).cookie;
	cookies.contractor = (await server.addMember(ownSiteId, ['contractor'], ours)).cookie;
	cookies['other-company'] = (await server.addMember(ownSiteId, ['contractor'], theirs)).cookie;
	cookies.nobody = (await server.addPerson('No Member')).cookie;
	const removed = await server.addMember(ownSiteId, ['site-engineer', 'project-engineer']);
	await db.update(memberships).set({ leftAt: server.platform.now() }).where(eq(memberships.userId, removed.userId));
	cookies.removed = removed.cookie;

	const secrets = new Set<string>();
	const foreignIds: Record<string, string> = {};
	for (const table of tables) {
		const columns = getTableColumns(table);
		if (columns.siteId === undefined || columns.id === undefined) continue;
		const rows = await db.select({ id: columns.id }).from(table).where(eq(columns.siteId, otherSiteId)).limit(2000);
		for (const { id } of rows) secrets.add(String(id));
		const [first] = rows;
		if (first !== undefined) foreignIds[`${getTableName(table).replace(/ies$/, 'y').replace(/s$/, '')}Id`] = String(first.id);
	}
	const renamed = { control_setId: 'controlSetId', audit_entrieId: 'olderThan', audit_entryId: 'olderThan' } as const;
	for (const [table, name] of Object.entries(renamed)) if (foreignIds[table] !== undefined) foreignIds[name] = foreignIds[table];
	const [person] = await db.select({ userId: memberships.userId }).from(memberships).where(eq(memberships.siteId, otherSiteId));
	foreignIds.userId = person?.userId ?? '';
	foreignIds.subjectId = foreignIds.fitId ?? '';
	secrets.add(otherSiteId);

	const ask: TwoSites['ask'] = async ({ path }, caller, input) => {
		const cookie = cookies[caller];
		const sent = JSON.stringify(input);
		const stop = new AbortController();
		const answer = await server.fetch(`/rpc/${path.replaceAll('.', '/')}`, {
			method: 'POST',
			headers: { 'content-type': 'application/json' },
			body: JSON.stringify({ json: input }),
			signal: stop.signal,
			...(cookie === undefined ? {} : { cookie }),
		});
		const body = answer.headers.get('content-type')?.startsWith('text/event-stream') ? 'stream' : await answer.text();
		stop.abort();
		const leaked = (body.match(/[0-9a-f]{8}-[0-9a-f-]{27}/g) ?? []).filter((id) => secrets.has(id) && !sent.includes(id));
		const code = answer.ok ? (body === 'stream' ? 'stream' : 'done') : codeIn(body);
		return { code, status: answer.status, leaked, body };
	};
	const inputFor: TwoSites['inputFor'] = (route, siteId, ids) => sampleInput(route.input, { ...ids, siteId });
	return { server, ownSiteId, otherSiteId, foreignIds, routes: routesOf(contract), ask, inputFor };
}

function codeIn(body: string): string {
	try {
		const { json } = JSON.parse(body) as { json?: { code?: string } };
		return json?.code ?? 'no code';
	} catch {
		return 'no code';
	}
}

export const guessedId = () => randomUUID();
