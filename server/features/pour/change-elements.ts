import { and, count, desc, eq, inArray } from 'drizzle-orm';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { lockSite } from '../../db/lock-site.ts';
import { elements, revisions } from '../../db/schema/model.ts';
import { pourElements } from '../../db/schema/pour.ts';
import { companies } from '../../db/schema/site.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { type LoadedLife, loadOwnLife } from './load-pour.ts';

interface ElementRef {
	modelId: string;
	globalId: string;
}

/** What is submitted or released is of these elements: they stay as they are from then on. */
function refuseFixed({ pour, points }: LoadedLife): void {
	const { state } = points['before-pour'];
	if (pour.state === 'planned' && ['open', 'called', 'more-asked', 'refused'].includes(state)) return;
	throw new Refused(
		'not-now',
		`Pour ${pour.number} is submitted or beyond, so its elements stay as they are. Nothing was changed.`,
		'elements',
	);
}

/** Puts elements of a model's newest ready revision into a pour that is not submitted yet, and takes others out. One at least stays. */
export async function changeElements(
	platform: Platform,
	member: Member,
	{ pourId, add, takeOut }: { pourId: string; add: readonly ElementRef[]; takeOut: readonly ElementRef[] },
): Promise<void> {
	await platform.transaction(async (tx) => {
		const { siteId } = member;
		await lockSite(tx, siteId);
		const loaded = await loadOwnLife(tx, member, pourId);
		refuseFixed(loaded);
		for (const [modelId, globalIds] of byModel(takeOut)) await tx.delete(pourElements).where(these(pourId, modelId, globalIds));
		for (const [modelId, globalIds] of byModel(add)) {
			const there = await newestGlobalIds(tx, siteId, modelId, globalIds);
			if (there.size < globalIds.length)
				throw new Refused('no-elements', 'Some of these elements are not in the newest revision. Nothing was changed.', 'add');
			const inIt = await tx
				.select({ globalId: pourElements.globalId })
				.from(pourElements)
				.where(these(pourId, modelId, globalIds));
			const known = new Set(inIt.map(({ globalId }) => globalId));
			const rows = globalIds
				.filter((globalId) => !known.has(globalId))
				.map((globalId) => ({ siteId, pourId, modelId, globalId, companyId: null }));
			await insertRows(tx, pourElements, rows);
		}
		const [left] = await tx.select({ rows: count() }).from(pourElements).where(eq(pourElements.pourId, pourId));
		if ((left?.rows ?? 0) === 0) throw new Refused('nothing-left', 'A pour has one element at least. Nothing was changed.', 'takeOut');
		await audit(tx, member, {
			kind: 'pour-elements-changed',
			subjectId: pourId,
			data: { number: loaded.pour.number, added: add.length, takenOut: takeOut.length, after: left?.rows ?? 0 },
		});
	});
}

/** Says whose these elements of a pour are, where they belong to another company than the pour (bolts: steel); null: the pour's own again. */
export async function giveElements(
	platform: Platform,
	member: Member,
	{ pourId, elements: given, companyId }: { pourId: string; elements: readonly ElementRef[]; companyId: string | null },
): Promise<void> {
	await platform.transaction(async (tx) => {
		const { siteId } = member;
		await lockSite(tx, siteId);
		const loaded = await loadOwnLife(tx, member, pourId);
		refuseFixed(loaded);
		if (companyId !== null)
			foundOne(
				await tx
					.select({ id: companies.id })
					.from(companies)
					.where(and(eq(companies.siteId, siteId), eq(companies.id, companyId))),
			);
		const own = companyId === loaded.pour.companyId ? null : companyId;
		let changed = 0;
		for (const [modelId, globalIds] of byModel(given)) {
			const rows = await tx
				.update(pourElements)
				.set({ companyId: own })
				.where(these(pourId, modelId, globalIds))
				.returning({ globalId: pourElements.globalId });
			changed += rows.length;
			if (rows.length < globalIds.length)
				throw new Refused('not-in-pour', 'Some of these elements are not in this pour. Nothing was changed.', 'elements');
		}
		await audit(tx, member, {
			kind: 'pour-elements-given',
			subjectId: pourId,
			data: { number: loaded.pour.number, companyId: own, elements: changed },
		});
	});
}

function these(pourId: string, modelId: string, globalIds: readonly string[]) {
	return and(eq(pourElements.pourId, pourId), eq(pourElements.modelId, modelId), inArray(pourElements.globalId, [...globalIds]));
}

/** Each once. */
function byModel(refs: readonly ElementRef[]): Map<string, string[]> {
	const grouped = new Map<string, Set<string>>();
	for (const { modelId, globalId } of refs) {
		const found = grouped.get(modelId);
		if (found === undefined) grouped.set(modelId, new Set([globalId]));
		else found.add(globalId);
	}
	return new Map([...grouped].map(([modelId, globalIds]) => [modelId, [...globalIds]]));
}

async function newestGlobalIds(tx: Transaction, siteId: string, modelId: string, globalIds: readonly string[]): Promise<Set<string>> {
	const revision = foundOne(
		await tx
			.select({ id: revisions.id })
			.from(revisions)
			.where(and(eq(revisions.siteId, siteId), eq(revisions.modelId, modelId), eq(revisions.state, 'ready')))
			.orderBy(desc(revisions.number))
			.limit(1),
	);
	const rows = await tx
		.select({ globalId: elements.globalId })
		.from(elements)
		.where(and(eq(elements.revisionId, revision.id), inArray(elements.globalId, [...globalIds])));
	return new Set(rows.map(({ globalId }) => globalId));
}
