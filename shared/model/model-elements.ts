import type { Vector3 } from '../geometry/frame.ts';
import { type CheckpointDensity, defaultCheckpointDensity } from '../site/site-settings.ts';
import { checkpointIdMaker } from './checkpoint-id.ts';
import { markElements } from './element-marks.ts';
import type { Checkpoint, Element, GridAxis } from './model-schema.ts';
import type { PlacedElement } from './place-checkpoints.ts';

/** An element with what its attributes and its shape gave, before marks and ids. */
export type ElementDraft = {
	entityNumber: number;
	globalId: string;
	fileGlobalId?: string;
	class: string;
	name: string;
	tag: string;
	storey: string;
	boxM: { min: Vector3; max: Vector3 } | null;
	placed: PlacedElement | null;
};

/** Names the elements and their checkpoints: marks unique in the file (a checkpoint's is its element's, a point, a letter and a number), ids as in checkpoint-id.ts. The checkpoints come one by one and once: there may be half a million. `kinds`: those that are wanted. */
export function nameElements(
	drafts: readonly ElementDraft[],
	grid: readonly GridAxis[],
	kinds: CheckpointDensity['kinds'] = defaultCheckpointDensity.kinds,
): { elements: Element[]; checkpoints: Iterable<Checkpoint> } {
	const marks = markElements(
		drafts.map((draft) => {
			const upright = draft.placed?.kind === 'column' || draft.placed?.kind === 'pile' || draft.placed?.kind === 'bolt';
			const plan = upright ? draft.placed!.drafts.find((checkpoint) => checkpoint.characteristic === 'plan') : undefined;
			const box = draft.boxM;
			return {
				kind: draft.placed?.kind ?? 'none',
				class: draft.class,
				name: draft.name,
				tag: draft.tag,
				storey: draft.storey,
				middleM: plan?.place ?? (box && [(box.min[0] + box.max[0]) / 2, (box.min[1] + box.max[1]) / 2, (box.min[2] + box.max[2]) / 2]),
				minM: box?.min ?? null,
				maxM: box?.max ?? null,
			};
		}),
		grid,
	);
	const elements = drafts.map((draft, at): Element => {
		const { mark, title } = marks[at]!;
		const { entityNumber, globalId, fileGlobalId, class: className, name, tag, storey, boxM, placed } = draft;
		return {
			entityNumber,
			globalId,
			...(fileGlobalId !== undefined && { fileGlobalId }),
			class: className,
			name,
			tag,
			storey,
			mark,
			title,
			sizesM: placed?.sizesM ?? { length: null, height: null, thickness: null },
			boxM: boxM && { min: [...boxM.min], max: [...boxM.max] },
		};
	});
	return { elements, checkpoints: nameCheckpoints(drafts, marks, kinds) };
}

function* nameCheckpoints(
	drafts: readonly ElementDraft[],
	marks: readonly { mark: string }[],
	kinds: CheckpointDensity['kinds'],
): Generator<Checkpoint> {
	const makeId = checkpointIdMaker();
	const uses = new Map<string, number>();
	for (const [at, draft] of drafts.entries()) {
		const { mark } = marks[at]!;
		if (!draft.placed || !draft.boxM) continue;
		// A GlobalId that repeats stands for several elements: the second one's checkpoints are told from the first one's by their order.
		const use = uses.get(draft.globalId) ?? 0;
		uses.set(draft.globalId, use + 1);
		const key = draft.globalId === '' ? `#${draft.entityNumber}` : use === 0 ? draft.globalId : `${draft.globalId}~${use}`;
		const totals = new Map<string, number>();
		for (const checkpoint of draft.placed.drafts) totals.set(checkpoint.code, (totals.get(checkpoint.code) ?? 0) + 1);
		const counts = new Map<string, number>();
		for (const checkpoint of draft.placed.drafts) {
			const number = (counts.get(checkpoint.code) ?? 0) + 1;
			counts.set(checkpoint.code, number);
			// Ids and numbers are given to all: a kind that is not wanted changes nothing of the others.
			const id = makeId(key, draft.boxM.min, checkpoint.characteristic, checkpoint.place, checkpoint.direction);
			if (!kinds[checkpoint.characteristic]) continue;
			yield {
				id,
				entityNumber: draft.entityNumber,
				globalId: draft.globalId,
				mark: `${mark}.${checkpoint.code}${totals.get(checkpoint.code) === 1 ? '' : number}`,
				characteristic: checkpoint.characteristic,
				place: [...checkpoint.place],
				direction: checkpoint.direction && [...checkpoint.direction],
				label: checkpoint.label,
				surface: checkpoint.surface,
				isSoffit: checkpoint.isSoffit,
			};
		}
	}
}
