import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';

/** What of a model is looked at: a storey, a class on it, words that are searched for; null: all. */
export interface ModelPlace {
	readonly storey: string | null;
	readonly class: string | null;
}

/** How a storey is called where an element names none. */
export const onNoStorey = 'On no storey';

export const storeyOf = ({ storey }: Pick<StoredElement, 'storey'>): string => storey || onNoStorey;

/** "IfcMechanicalFastener" → "mechanical fastener": a class in words. */
export function classWords(ifcClass: string): string {
	return ifcClass
		.replace(/^Ifc/, '')
		.replace(/([a-z0-9])([A-Z])/g, '$1 $2')
		.toLowerCase();
}

/** The address's word for a place: "Ground", "Ground/IfcColumn"; null is all. */
export function placeFromAddress(word: string | null): ModelPlace {
	if (word === null) return { storey: null, class: null };
	const [storey, ifcClass] = splitLast(word);
	return { storey, class: ifcClass ?? null };
}

export function placeToAddress({ storey, class: ifcClass }: ModelPlace): string | null {
	return storey === null ? null : ifcClass === null ? storey : `${storey}/${ifcClass}`;
}

/** A storey's own name may hold a stroke: only what begins with Ifc after the last one is a class. */
function splitLast(word: string): [string, string?] {
	const at = word.lastIndexOf('/Ifc');
	return at < 0 ? [word] : [word.slice(0, at), word.slice(at + 1)];
}

/** The elements of a place that hold all the words. */
export function elementsAt(elements: readonly StoredElement[], place: ModelPlace, find: string): StoredElement[] {
	const words = find.toLowerCase().split(/\s+/).filter(Boolean);
	return elements.filter((element) => {
		if (place.storey !== null && storeyOf(element) !== place.storey) return false;
		if (place.class !== null && element.class !== place.class) return false;
		if (words.length === 0) return true;
		const text = `${element.title} ${element.mark} ${element.class} ${element.tag} ${element.name} ${element.storey}`.toLowerCase();
		return words.every((word) => text.includes(word));
	});
}

/** One class on one storey, counted. */
export interface TreeLeaf {
	readonly class: string;
	readonly elementCount: number;
	/** Elements that have no checkpoint. */
	readonly withoutCount: number;
	readonly checkpointCount: number;
}
export interface TreeBranch extends Omit<TreeLeaf, 'class'> {
	readonly storey: string;
	readonly classes: readonly TreeLeaf[];
}

/** Storeys in the model's own order, each with its classes by name. */
export function treeOf(elements: readonly StoredElement[], storeys: readonly { name: string }[]): TreeBranch[] {
	const byStorey = new Map<string, StoredElement[]>(storeys.map(({ name }) => [name, []]));
	for (const element of elements) {
		const own = byStorey.get(storeyOf(element));
		if (own) own.push(element);
		else byStorey.set(storeyOf(element), [element]);
	}
	const counted = (own: readonly StoredElement[]) => ({
		elementCount: own.length,
		withoutCount: own.filter(({ checkpointCount }) => checkpointCount === 0).length,
		checkpointCount: own.reduce((sum, { checkpointCount }) => sum + checkpointCount, 0),
	});
	return [...byStorey]
		.filter(([, own]) => own.length > 0)
		.map(([storey, own]) => {
			const classes = [...new Set(own.map((element) => element.class))].sort();
			return {
				storey,
				...counted(own),
				classes: classes.map((ifcClass) => ({ class: ifcClass, ...counted(own.filter((element) => element.class === ifcClass)) })),
			};
		});
}

/** Why elements have no checkpoint, the commonest first, with the elements it is true of. Figures in a reason do not tell two apart. */
export function reasonsWithout(
	skipped: readonly { entityNumber: number; why: string }[],
	elements: readonly StoredElement[],
): { why: string; elements: StoredElement[] }[] {
	const byNumber = new Map(elements.map((element) => [element.entityNumber, element]));
	const groups = new Map<string, { why: string; elements: StoredElement[] }>();
	for (const { entityNumber, why } of skipped) {
		const element = byNumber.get(entityNumber);
		if (element === undefined) continue;
		const key = why.replace(/\d+(\.\d+)?/g, '#');
		const group = groups.get(key) ?? { why, elements: [] };
		group.elements.push(element);
		groups.set(key, group);
	}
	return [...groups.values()].sort((a, b) => b.elements.length - a.elements.length);
}

/** Checkpoints by their element, in the order given. */
export function checkpointsByElement(checkpoints: readonly StoredCheckpoint[]): Map<string, StoredCheckpoint[]> {
	const byElement = new Map<string, StoredCheckpoint[]>();
	for (const checkpoint of checkpoints) {
		const own = byElement.get(checkpoint.elementId);
		if (own) own.push(checkpoint);
		else byElement.set(checkpoint.elementId, [checkpoint]);
	}
	return byElement;
}
