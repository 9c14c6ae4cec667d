import { and, desc, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { PourSummary, pourForm } from '#shared/pour/contract.ts';
import type { Handle } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { elements, models, revisions } from '../../db/schema/model.ts';
import { holdPoints, pourElements, pours } from '../../db/schema/pour.ts';
import { companies } from '../../db/schema/site.ts';
import { isUniqueViolation } from '../../db/unique-violation.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { pourOf } from './queries.ts';

type PourForm = z.infer<typeof pourForm>;

/**
 * Adds a pour with its two hold points, both open. Storeys and classes become the GlobalIds of the model's newest ready revision.
 * Refused: a number that is taken, a model that is not read, a kind of element that the model does not have.
 */
export async function addPour(platform: Platform, member: Member, pour: PourForm): Promise<PourSummary> {
	const { siteId } = member;
	const pourId = platform.newId();
	try {
		await platform.transaction(async (tx) => {
			foundOne(
				await tx
					.select({ id: companies.id })
					.from(companies)
					.where(and(eq(companies.siteId, siteId), eq(companies.id, pour.companyId))),
			);
			const globalIds = await globalIdsOf(tx, siteId, pour);
			await tx.insert(pours).values({
				id: pourId,
				siteId,
				number: pour.number,
				name: pour.name,
				companyId: pour.companyId,
				plannedAt: pour.plannedAt,
				state: 'planned',
			});
			const rows = globalIds.map((globalId) => ({ siteId, pourId, modelId: pour.modelId, globalId, companyId: null }));
			await insertRows(tx, pourElements, rows);
			for (const kind of ['before-pour', 'after-pour'] as const) {
				await tx.insert(holdPoints).values({ id: platform.newId(), siteId, pourId, kind, state: 'open', list: [] });
			}
			const data = { number: pour.number, name: pour.name, companyId: pour.companyId, elements: globalIds.length };
			await audit(tx, member, { kind: 'pour-added', subjectId: pourId, data });
		});
	} catch (error) {
		if (!isUniqueViolation(error, 'pours_number')) throw error;
		throw new Refused('number-taken', `There is a pour ${pour.number} already. Give this one another number.`, 'pour.number');
	}
	return pourOf(platform.db, member, pourId);
}

/** Each once, in the order of the file. */
async function globalIdsOf(tx: Handle, siteId: string, pour: PourForm): Promise<string[]> {
	foundOne(
		await tx
			.select({ id: models.id })
			.from(models)
			.where(and(eq(models.siteId, siteId), eq(models.id, pour.modelId))),
	);
	const [revision] = await tx
		.select({ id: revisions.id })
		.from(revisions)
		.where(and(eq(revisions.modelId, pour.modelId), eq(revisions.state, 'ready')))
		.orderBy(desc(revisions.number))
		.limit(1);
	if (revision === undefined) {
		throw new Refused('no-revision', 'This model has no revision that is read yet. Wait for it, then add the pour.', 'pour.modelId');
	}
	const there = await tx
		.select({ globalId: elements.globalId, storey: elements.storey, class: elements.class })
		.from(elements)
		.where(eq(elements.revisionId, revision.id))
		.orderBy(elements.entityNumber);
	const chosen = new Set<string>();
	for (const [index, kind] of pour.elements.entries()) {
		const found = there.filter((element) => element.storey === kind.storey && element.class === kind.class);
		if (found.length === 0) {
			const place = kind.storey === '' ? 'without a storey' : `on storey "${kind.storey}"`;
			throw new Refused('no-elements', `The model has no ${kind.class} ${place}.`, `pour.elements.${index}`);
		}
		for (const { globalId } of found) if (globalId !== '') chosen.add(globalId);
	}
	if (chosen.size === 0) {
		throw new Refused(
			'no-global-ids',
			'None of these elements has a GlobalId, so they cannot be told again in the next revision.',
			'pour.elements',
		);
	}
	return [...chosen];
}
