import { pointNameKey } from '../survey/point-name.ts';
import { longestMark, markEnd } from './mark-rules.ts';
import type { Checkpoint, Element } from './model-schema.ts';

/**
 * Gives elements the names that people gave them in an earlier revision, by GlobalId, and their checkpoints with them. A GlobalId that stands
 * twice in the file names nobody. An element whose own name such a name takes gets a number behind it. Order and all else stay.
 */
export function keepMarks<OneElement extends Element, OneCheckpoint extends Checkpoint>(
	elements: readonly OneElement[],
	checkpoints: readonly OneCheckpoint[],
	kept: ReadonlyMap<string, string>,
): { elements: OneElement[]; checkpoints: OneCheckpoint[] } {
	if (kept.size === 0) return { elements: [...elements], checkpoints: [...checkpoints] };
	const uses = new Map<string, number>();
	for (const { globalId } of elements) uses.set(globalId, (uses.get(globalId) ?? 0) + 1);
	const named = new Map<number, string>();
	for (const { entityNumber, globalId } of elements) {
		const mark = uses.get(globalId) === 1 ? kept.get(globalId) : undefined;
		if (mark !== undefined) named.set(entityNumber, mark);
	}
	const given = new Set([...named.values()].map(pointNameKey));
	const taken = new Set([...given, ...elements.flatMap(({ entityNumber, mark }) => (named.has(entityNumber) ? [] : [pointNameKey(mark)]))]);
	for (const { entityNumber, mark } of elements) {
		if (named.has(entityNumber) || !given.has(pointNameKey(mark))) continue;
		let number = 2;
		let other: string;
		do {
			const end = `-${number++}`;
			other = `${mark.slice(0, longestMark - end.length)}${end}`;
		} while (taken.has(pointNameKey(other)));
		taken.add(pointNameKey(other));
		named.set(entityNumber, other);
	}
	const before = new Map(elements.map(({ entityNumber, mark }) => [entityNumber, mark]));
	return {
		elements: elements.map((element) => ({ ...element, mark: named.get(element.entityNumber) ?? element.mark })),
		checkpoints: checkpoints.map((checkpoint) => {
			const mark = named.get(checkpoint.entityNumber);
			return mark === undefined
				? checkpoint
				: { ...checkpoint, mark: mark + markEnd(before.get(checkpoint.entityNumber)!, checkpoint.mark) };
		}),
	};
}
