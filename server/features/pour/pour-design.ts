import { createHash } from 'node:crypto';
import { and, asc, desc, eq, inArray } from 'drizzle-orm';
import { canonicalJson } from '#shared/record/canonical-json.ts';
import type { Handle } from '../../db/database.ts';
import { checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import type { pourElements } from '../../db/schema/pour.ts';

type ElementRow = typeof elements.$inferSelect;
type CheckpointRow = typeof checkpoints.$inferSelect;

/** An element of a pour as it stands in one revision, with its checkpoints. */
export interface DesignedElement {
	element: ElementRow;
	checkpoints: CheckpointRow[];
	/** Of place, shape and checkpoints, to a tenth of a millimetre: the same where a revision leaves it alone. */
	designSha256: string;
}

/** A model of a pour: its newest ready revision and the pour's elements in it. */
export interface PourModel {
	modelId: string;
	modelName: string;
	buildingId: string | null;
	revision: { id: string; number: number; reading: (typeof revisions.$inferSelect)['reading'] };
	/** By GlobalId. */
	elements: ReadonlyMap<string, DesignedElement>;
	/** GlobalIds of the pour that the revision does not have. */
	gone: readonly string[];
}

/** The pour's elements in the newest ready revision of each of its models. */
export async function pourModels(db: Handle, siteId: string, rows: readonly (typeof pourElements.$inferSelect)[]): Promise<PourModel[]> {
	const found: PourModel[] = [];
	for (const modelId of new Set(rows.map((row) => row.modelId))) {
		const [newest] = await db
			.select({ revision: revisions, model: models })
			.from(revisions)
			.innerJoin(models, eq(models.id, revisions.modelId))
			.where(and(eq(revisions.siteId, siteId), eq(revisions.modelId, modelId), eq(revisions.state, 'ready')))
			.orderBy(desc(revisions.number))
			.limit(1);
		if (newest === undefined) continue;
		const globalIds = rows.flatMap((row) => (row.modelId === modelId ? [row.globalId] : []));
		const designed = await designedElements(db, newest.revision.id, globalIds);
		found.push({
			modelId,
			modelName: newest.model.name,
			buildingId: newest.model.buildingId,
			revision: newest.revision,
			elements: designed,
			gone: globalIds.filter((globalId) => !designed.has(globalId)),
		});
	}
	return found;
}

/** These elements in one revision, in the order of its file. */
export async function designedElements(
	db: Handle,
	revisionId: string,
	globalIds: readonly string[],
): Promise<Map<string, DesignedElement>> {
	if (globalIds.length === 0) return new Map();
	const rows = await db
		.select()
		.from(elements)
		.where(and(eq(elements.revisionId, revisionId), inArray(elements.globalId, [...globalIds])))
		.orderBy(asc(elements.entityNumber));
	if (rows.length === 0) return new Map();
	const placed = await db
		.select()
		.from(checkpoints)
		.where(
			and(
				eq(checkpoints.revisionId, revisionId),
				inArray(
					checkpoints.elementId,
					rows.map(({ id }) => id),
				),
			),
		)
		.orderBy(asc(checkpoints.position));
	const byElement = new Map<string, CheckpointRow[]>();
	for (const row of placed) byElement.set(row.elementId, [...(byElement.get(row.elementId) ?? []), row]);
	return new Map(
		rows.map((element) => {
			const own = byElement.get(element.id) ?? [];
			return [element.globalId, { element, checkpoints: own, designSha256: designHash(element, own) }];
		}),
	);
}

function designHash({ boxM, lengthM, heightM, thicknessM }: ElementRow, own: readonly CheckpointRow[]): string {
	const value = {
		boxM: boxM?.map(tenths) ?? null,
		sizes: [lengthM, heightM, thicknessM].map((size) => (size === null ? null : tenths(size))),
		checkpoints: own
			.map(({ characteristic, xM, yM, zM, normal, surface }) => [
				characteristic,
				[xM, yM, zM].map(tenths),
				normal?.map(tenths) ?? null,
				surface?.map(tenths) ?? null,
			])
			.map((one) => canonicalJson(one))
			.sort(),
	};
	return createHash('sha256').update(canonicalJson(value)).digest('hex');
}

const tenths = (metres: number): number => Math.round(metres * 10_000) + 0;
