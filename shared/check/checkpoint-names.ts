import { pointNameKey } from '../survey/point-name.ts';
import type { CheckInput } from './check-input.ts';

/** Names of checkpoints and elements → the checkpoints they can mean. An id, being exact, comes before a mark. */
export function checkpointNames(input: CheckInput): { byId: Map<string, number>; byMark: Map<string, number[]> } {
	const byId = new Map<string, number>();
	const byMark = new Map<string, number[]>();
	const elementMark = new Map(input.elements.map((element) => [element.id, pointNameKey(element.mark)]));
	input.checkpoints.forEach((checkpoint, index) => {
		byId.set(checkpoint.id.toLowerCase(), index);
		for (const key of new Set([pointNameKey(checkpoint.mark), elementMark.get(checkpoint.elementId) ?? ''])) {
			if (key === '') continue;
			const list = byMark.get(key);
			if (list) list.push(index);
			else byMark.set(key, [index]);
		}
	});
	return { byId, byMark };
}
