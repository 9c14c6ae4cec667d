import { and, eq } from 'drizzle-orm';
import type { ModelReading } from '#shared/model/model-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { checkpoints, elements, revisions } from '../../db/schema/model.ts';
import { storable } from '../../db/storable-text.ts';
import type { KeptFile } from '../../platform/platform.ts';
import { rememberFile } from '../../platform/uploads.ts';
import { withSayings } from './kept-sayings.ts';
import { lockModel } from './newest-revision.ts';

/**
 * Stores what was read of a revision, whole or not at all. False where the revision is no longer being read: the job ran twice, or
 * was cancelled meanwhile; then nothing is written.
 */
export async function storeReading(
	tx: Transaction,
	{ siteId, revisionId }: { siteId: string; revisionId: string },
	reading: ModelReading,
	picture: KeptFile | null,
	{ newId, now }: { newId: () => string; now: () => Date },
): Promise<boolean> {
	const [revision] = await tx
		.select({ modelId: revisions.modelId })
		.from(revisions)
		.where(and(eq(revisions.id, revisionId), eq(revisions.state, 'reading')));
	if (revision === undefined) return false;
	await lockModel(tx, revision.modelId);
	if (picture !== null) await rememberFile(tx, picture, now());
	const known = await withSayings(tx, revision.modelId, storable(reading));
	const { elements: readElements, checkpoints: readCheckpoints, ...head } = known;
	const ready = await tx
		.update(revisions)
		.set({ state: 'ready', reason: null, reading: head, pictureSha256: picture?.sha256 ?? null })
		.where(and(eq(revisions.id, revisionId), eq(revisions.state, 'reading')))
		.returning({ id: revisions.id });
	if (ready.length === 0) return false;
	const idOf = new Map(readElements.map(({ entityNumber }) => [entityNumber, newId()]));
	await insertRows(
		tx,
		elements,
		readElements.map((element) => ({
			id: required(idOf, element.entityNumber),
			siteId,
			revisionId,
			entityNumber: element.entityNumber,
			globalId: element.globalId,
			fileGlobalId: element.fileGlobalId ?? null,
			class: element.class,
			name: element.name,
			tag: element.tag,
			storey: element.storey,
			mark: element.mark,
			title: element.title,
			lengthM: element.sizesM.length,
			heightM: element.sizesM.height,
			thicknessM: element.sizesM.thickness,
			boxM: element.boxM === null ? null : [...element.boxM.min, ...element.boxM.max],
		})),
	);
	await insertRows(
		tx,
		checkpoints,
		readCheckpoints.map((checkpoint, position) => ({
			revisionId,
			id: checkpoint.id,
			elementId: required(idOf, checkpoint.entityNumber),
			position,
			mark: checkpoint.mark,
			characteristic: checkpoint.characteristic,
			label: checkpoint.label,
			xM: checkpoint.place[0],
			yM: checkpoint.place[1],
			zM: checkpoint.place[2],
			normal: checkpoint.direction,
			surface: checkpoint.surface,
			isSoffit: checkpoint.isSoffit,
		})),
	);
	return true;
}

function required(idOf: ReadonlyMap<number, string>, entityNumber: number): string {
	const id = idOf.get(entityNumber);
	if (id === undefined) throw new Error(`A checkpoint names element #${entityNumber}, which was not read.`);
	return id;
}
