import { and, asc, desc, eq } from 'drizzle-orm';
import { standingOf } from '#shared/check/standing.ts';
import { type ChangedVerdict, type WeighedCheckpoint, type WeighedSheet, weighSheet } from '#shared/check/weigh-sheet.ts';
import { gridYawRad } from '#shared/model/grid-yaw.ts';
import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { SheetWeight } from '#shared/tolerance/contract.ts';
import { characteristic, type ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Handle } from '../../db/database.ts';
import { elementOf } from '../../db/model-rows.ts';
import { readMeasurements } from '../../db/read-measurements.ts';
import { checks } from '../../db/schema/check.ts';
import { checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import { buildings } from '../../db/schema/site.ts';
import type { Member } from '../../platform/platform.ts';

const mostListed = 40;
const mostMarks = 8;

/**
 * What a sheet would decide on the newest revisions, and which verdicts of all published checks and of the newest trial it would change. Who is only a
 * contractor is told the counts, not what was measured of others' work.
 */
export async function sheetWeightOf(db: Handle, member: Member, sheet: ToleranceSheet): Promise<SheetWeight> {
	const { siteId } = member;
	const [trial] = await db
		.select({ id: checks.id })
		.from(checks)
		.where(and(eq(checks.siteId, siteId), eq(checks.state, 'trial')))
		.orderBy(desc(checks.number))
		.limit(1);
	const weights = (await weighModels(db, siteId, sheet, trial?.id)).map(({ weight }) => weight);
	const undecided = weights.flatMap((weight) => weight.undecided);
	const changes = seesEveryPour(member.roles) ? weights.flatMap((weight) => weight.changes) : [];
	return {
		decides: sheet.rules.map((_, index) => weights.reduce((sum, { decides }) => sum + (decides[index] ?? 0), 0)),
		undecidedCount: undecided.length,
		undecided: grouped(undecided, ({ subject }) => `${subject.class}\n${subject.characteristic}`).map((group) => ({
			class: group[0]!.subject.class,
			characteristic: characteristic.parse(group[0]!.subject.characteristic),
			count: group.length,
			marks: [...new Set(group.map(({ mark }) => mark))].slice(0, mostMarks),
		})),
		changeCount: changes.length,
		changes: grouped(changes, ({ was, is }) => `${was}\n${is}`).map((group) => ({
			was: group[0]!.was,
			is: group[0]!.is,
			count: group.length,
			first: group.slice(0, mostListed).map(({ was: _was, is: _is, wasMm, isMm, ...rest }) => ({
				...rest,
				wasMm: wasMm === null ? null : [wasMm[0], wasMm[1]],
				isMm: isMm === null ? null : [isMm[0], isMm[1]],
			})),
		})),
		faults: weights.flatMap((weight) => weight.faults).map((fault) => ({ ...fault })),
	};
}

/** In groups of one key, the largest first; within a group in the order given. */
function grouped<T>(all: readonly T[], keyOf: (one: T) => string): T[][] {
	const groups = new Map<string, T[]>();
	for (const one of all) {
		const key = keyOf(one);
		const group = groups.get(key);
		if (group === undefined) groups.set(key, [one]);
		else group.push(one);
	}
	return [...groups.values()].sort((a, b) => b.length - a.length);
}

/** A sheet held against the newest revision of each model, and against what all published checks (and one trial, where asked) measured last. */
async function weighModels(
	db: Handle,
	siteId: string,
	sheet: ToleranceSheet,
	withCheckId?: string,
): Promise<{ modelId: string; weight: WeighedSheet }[]> {
	const measured = await readMeasurements(db, { siteId, ...(withCheckId !== undefined && { withCheckId }) });
	const standings = new Map(standingOf(measured).map((one) => [`${one.modelId}\n${one.checkpointId}`, one.newest]));
	const weights: { modelId: string; weight: WeighedSheet }[] = [];
	const newest = await db
		.selectDistinctOn([revisions.modelId], { revision: revisions, building: buildings.name })
		.from(revisions)
		.innerJoin(models, eq(models.id, revisions.modelId))
		.leftJoin(buildings, eq(buildings.id, models.buildingId))
		.where(and(eq(revisions.siteId, siteId), eq(revisions.state, 'ready')))
		.orderBy(revisions.modelId, desc(revisions.number));
	for (const { revision, building } of newest) {
		const rows = await db
			.select({ checkpoint: checkpoints, element: elements })
			.from(checkpoints)
			.innerJoin(elements, eq(elements.id, checkpoints.elementId))
			.where(eq(checkpoints.revisionId, revision.id))
			.orderBy(asc(checkpoints.position));
		const weighed = rows.map(({ checkpoint, element }): WeighedCheckpoint => {
			const standing = standings.get(`${revision.modelId}\n${checkpoint.id}`);
			const { class: className, storey, tag, mark, sizesM } = elementOf(element);
			return {
				checkpointId: checkpoint.id,
				mark: element.title || mark,
				label: checkpoint.label,
				subject: { class: className, characteristic: checkpoint.characteristic, storey, building, tag, mark, sizesM },
				deviation: standing?.deviation ?? null,
				stage: standing?.stage ?? 'as-cast',
			};
		});
		weights.push({ modelId: revision.modelId, weight: weighSheet(sheet, weighed, gridYawRad(revision.reading?.grid ?? []) ?? 0) });
	}
	return weights;
}

/** The verdicts of published checks that a sheet would change, by model and checkpoint ("modelId checkpointId"). */
export async function verdictsChangedBy(db: Handle, siteId: string, sheet: ToleranceSheet): Promise<Map<string, ChangedVerdict>> {
	const weights = await weighModels(db, siteId, sheet);
	return new Map(
		weights.flatMap(({ modelId, weight }) => weight.changes.map((change) => [`${modelId} ${change.checkpointId}`, change] as const)),
	);
}
