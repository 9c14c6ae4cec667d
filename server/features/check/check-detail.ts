import { and, asc, eq, inArray } from 'drizzle-orm';
import type { CheckDetail, CheckElement } from '#shared/check/contract.ts';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { takeBackMs } from '#shared/mail/notice.ts';
import type { Handle } from '../../db/database.ts';
import { deviationOf } from '../../db/deviation-rows.ts';
import { checkpointOf } from '../../db/model-rows.ts';
import { type checks, deviations } from '../../db/schema/check.ts';
import { checkpoints, elements, revisions } from '../../db/schema/model.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne } from '../../platform/refuse.ts';
import { narrowedTo } from './policy.ts';
import { checkHeadOf, ownElement } from './queries.ts';

/**
 * A check with its deviations in checkpoint order and the elements they stand on. Who is only a contractor gets the elements of its own
 * companies' pours, and of the findings those that speak of nothing else.
 */
export async function checkDetailOf(db: Handle, member: Member, checkId: string): Promise<CheckDetail> {
	const { head, row } = await checkHeadOf(db, member, checkId);
	const companyIds = narrowedTo(member);
	const pourIdsOf = await pourIdsByGlobalId(db, row.revision.revisionId, companyIds);
	const elementRows = await db
		.select()
		.from(elements)
		.where(eq(elements.revisionId, row.revision.revisionId))
		.orderBy(asc(elements.entityNumber));
	const seen = companyIds === null ? elementRows : elementRows.filter(({ globalId }) => pourIdsOf.has(globalId));
	const byId = new Map(seen.map((element) => [element.id, element]));
	const stored = await db
		.select({ deviation: deviations, checkpoint: checkpoints })
		.from(deviations)
		.innerJoin(checkpoints, and(eq(checkpoints.revisionId, deviations.revisionId), eq(checkpoints.id, deviations.checkpointId)))
		.where(eq(deviations.checkId, checkId))
		.orderBy(asc(deviations.position));
	const own = stored.filter(({ checkpoint }) => byId.has(checkpoint.elementId));
	const shown = new Set(own.map(({ checkpoint }) => checkpoint.elementId));
	const ownIds = new Set(own.map(({ checkpoint }) => checkpoint.id));
	return {
		...head,
		findings: findingsFor(row.check.findings ?? [], companyIds === null ? null : new Set(seen.map(({ mark }) => mark))),
		...(await leftOutFor(db, row.check, byId)),
		...takeBackFor(member, row.check),
		unmatchedPoints: companyIds === null ? (row.check.unmatchedPoints ?? []) : [],
		elements: seen
			.filter(({ id }) => shown.has(id))
			.map(
				(element): CheckElement => ({
					elementId: element.id,
					globalId: element.globalId,
					entityNumber: element.entityNumber,
					class: element.class,
					title: element.title,
					mark: element.mark,
					storey: element.storey,
					pourIds: pourIdsOf.get(element.globalId) ?? [],
				}),
			),
		derived: (row.check.derived ?? []).filter(
			({ elementId, from }) => byId.has(elementId) && from.every((checkpointId) => ownIds.has(checkpointId)),
		),
		deviations: own.map(({ deviation, checkpoint }) => {
			const element = foundOne([byId.get(checkpoint.elementId)].filter((one) => one !== undefined));
			return deviationOf(deviation, checkpointOf(checkpoint, element));
		}),
	};
}

/** Until when the member may take back that they published it: whether it is too late by the clock is the reader's to see. */
function takeBackFor({ userId }: Member, check: typeof checks.$inferSelect): Pick<CheckDetail, 'takeBackUntil'> {
	if (check.state !== 'published' || check.publishedBy !== userId || check.publishedAt === null || check.publishedAct === null) return {};
	return { takeBackUntil: new Date(check.publishedAt.getTime() + takeBackMs) };
}

/** What was left out of the elements that the member sees, counted by reason and person. */
async function leftOutFor(
	db: Handle,
	{ leftOut, revisionId }: typeof checks.$inferSelect,
	seen: ReadonlyMap<string, unknown>,
): Promise<Pick<CheckDetail, 'leftOut'>> {
	if (leftOut === null || leftOut.length === 0) return {};
	const placed = await db
		.select({ id: checkpoints.id, elementId: checkpoints.elementId })
		.from(checkpoints)
		.where(
			and(
				eq(checkpoints.revisionId, revisionId),
				inArray(
					checkpoints.id,
					leftOut.map(({ checkpointId }) => checkpointId),
				),
			),
		);
	const own = new Set(placed.flatMap(({ id, elementId }) => (seen.has(elementId) ? [id] : [])));
	const counts = new Map<string, { reason: string; by: string; count: number }>();
	for (const { checkpointId, reason, by } of leftOut) {
		if (!own.has(checkpointId)) continue;
		const key = JSON.stringify([reason, by]);
		const counted = counts.get(key) ?? { reason, by, count: 0 };
		counts.set(key, { ...counted, count: counted.count + 1 });
	}
	return counts.size === 0 ? {} : { leftOut: [...counts.values()].sort((one, other) => other.count - one.count) };
}

/** Of all pours, or of those companies'. */
async function pourIdsByGlobalId(db: Handle, revisionId: string, companyIds: readonly string[] | null): Promise<Map<string, string[]>> {
	const pourIdsOf = new Map<string, string[]>();
	if (companyIds?.length === 0) return pourIdsOf;
	const rows = await db
		.select({ globalId: pourElements.globalId, pourId: pours.id })
		.from(pourElements)
		.innerJoin(pours, eq(pours.id, pourElements.pourId))
		.innerJoin(revisions, eq(revisions.modelId, pourElements.modelId))
		.where(and(eq(revisions.id, revisionId), companyIds === null ? undefined : ownElement(companyIds)))
		.orderBy(asc(pours.number));
	for (const { globalId, pourId } of rows) pourIdsOf.set(globalId, [...(pourIdsOf.get(globalId) ?? []), pourId]);
	return pourIdsOf;
}

function findingsFor(findings: readonly Finding[], ownMarks: ReadonlySet<string> | null): Finding[] {
	if (ownMarks === null) return [...findings];
	return findings.filter(({ pairs }) => pairs.length > 0 && pairs.every((name) => ownMarks.has(name)));
}
