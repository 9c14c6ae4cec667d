import { asc, eq } from 'drizzle-orm';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { modelFinding } from '#shared/model/ifc-finding.ts';
import { keepMarks } from '#shared/model/keep-marks.ts';
import type { Checkpoint, Element, ModelReading } from '#shared/model/model-schema.ts';
import type { Transaction } from '../../db/database.ts';
import { vectorOf } from '../../db/model-rows.ts';
import { addedCheckpoints, elementMarks } from '../../db/schema/model.ts';

/** An element that stands and is shaped as it was, to 1 mm: what is asked for there still holds. */
const samePlaceM = 0.001;

/** A reading with what people said of the model's earlier revisions: their names for elements, and the checkpoints they placed themselves. */
export async function withSayings(tx: Transaction, modelId: string, reading: ModelReading): Promise<ModelReading> {
	const renamed = await tx.select().from(elementMarks).where(eq(elementMarks.modelId, modelId));
	const named = keepMarks(reading.elements, reading.checkpoints, new Map(renamed.map(({ globalId, mark }) => [globalId, mark])));
	const rows = await tx
		.select()
		.from(addedCheckpoints)
		.where(eq(addedCheckpoints.modelId, modelId))
		.orderBy(asc(addedCheckpoints.addedAt), asc(addedCheckpoints.id));
	if (rows.length === 0) return { ...reading, ...named };
	const byGlobalId = new Map<string, Element[]>();
	for (const element of named.elements) byGlobalId.set(element.globalId, [...(byGlobalId.get(element.globalId) ?? []), element]);
	const ids = new Set(named.checkpoints.map(({ id }) => id));
	const carried: Checkpoint[] = [];
	const lost: { label: string; element: string; why: string }[] = [];
	for (const row of rows) {
		const [element, ...others] = byGlobalId.get(row.globalId) ?? [];
		if (element === undefined || others.length > 0 || ids.has(row.id)) {
			lost.push({ label: row.label, element: row.globalId, why: 'its element is not in this revision' });
		} else if (!isWhereItWas(element, row.boxM)) {
			lost.push({ label: row.label, element: element.mark, why: `${element.mark} was moved or reshaped` });
		} else {
			carried.push({
				id: row.id,
				entityNumber: element.entityNumber,
				globalId: element.globalId,
				mark: `${element.mark}.${row.markEnd}`,
				characteristic: row.characteristic,
				place: [row.xM, row.yM, row.zM],
				direction: row.normal === null ? null : vectorOf(row.normal),
				label: row.label,
				surface: row.surface === null ? null : vectorOf(row.surface),
				isSoffit: row.isSoffit,
			});
		}
	}
	return {
		...reading,
		elements: named.elements,
		checkpoints: [...named.checkpoints, ...carried],
		findings: [...reading.findings, ...lostFindings(lost)],
	};
}

function isWhereItWas({ boxM }: Element, before: readonly number[]): boolean {
	return boxM !== null && [...boxM.min, ...boxM.max].every((part, at) => Math.abs(part - before[at]!) <= samePlaceM);
}

function lostFindings(lost: readonly { label: string; element: string; why: string }[]): Finding[] {
	if (lost.length === 0) return [];
	const told = lost.slice(0, 5).map(({ label, why }) => `"${label}" (${why})`);
	const more = lost.length > 5 ? ` and ${lost.length - 5} more` : '';
	return [
		modelFinding(
			'added-checkpoint-lost',
			`${lost.length === 1 ? 'A checkpoint' : `${lost.length} checkpoints`} that a person had placed ${lost.length === 1 ? 'was' : 'were'} not carried over: ${told.join(', ')}${more}. Place ${lost.length === 1 ? 'it' : 'them'} anew where still wanted.`,
			{ count: lost.length },
			lost.map(({ element }) => element),
		),
	];
}
