import type { Vector3 } from '../geometry/frame.ts';
import type { Characteristic } from '../tolerance/sheet-schema.ts';

/** What sameness is told by: place and shape, metres, design frame. */
export interface ComparedElement {
	readonly globalId: string;
	readonly class: string;
	readonly boxM: { readonly min: Vector3; readonly max: Vector3 } | null;
	readonly checkpoints: readonly { readonly characteristic: Characteristic; readonly place: Vector3 }[];
}

/** DOMAIN: shape and place are the same to 1 mm. */
const sameM = 0.001;
const cellM = 0.01;

const isNear = (one: Vector3, other: Vector3): boolean => [0, 1, 2].every((k) => Math.abs(one[k]! - other[k]!) <= sameM);

/** Every place has its own counterpart of the same kind. Which came first does not matter. */
function haveSameCheckpoints(one: ComparedElement, other: ComparedElement): boolean {
	if (one.checkpoints.length !== other.checkpoints.length) return false;
	const left = [...other.checkpoints];
	return one.checkpoints.every(({ characteristic, place }) => {
		const at = left.findIndex((each) => each.characteristic === characteristic && isNear(each.place, place));
		if (at >= 0) left.splice(at, 1);
		return at >= 0;
	});
}

const keysAbout = ({ class: className, boxM }: ComparedElement): string[] => {
	const cells = [0, 1, 2].map((k) => {
		const whole = Math.floor(boxM!.min[k]! / cellM);
		const rest = boxM!.min[k]! / cellM - whole;
		return rest < 0.1 ? [whole, whole - 1] : rest > 0.9 ? [whole, whole + 1] : [whole];
	});
	return cells[0]!.flatMap((x) => cells[1]!.flatMap((y) => cells[2]!.map((z) => `${className}|${x},${y},${z}`)));
};

/**
 * Elements of a newer revision that stand and are shaped as one of the older, to 1 mm, though their GlobalId is new: same class, box and,
 * where `areShapesCompared` (both were placed at one spacing), checkpoints. Only where neither has a second such counterpart.
 * @returns pairs [new GlobalId, the one it was known by]
 */
export function sameElements(
	newer: readonly ComparedElement[],
	older: readonly ComparedElement[],
	areShapesCompared: boolean,
): [string, string][] {
	const fresh = withoutThoseOf(newer, older);
	const gone = withoutThoseOf(older, newer);
	const byCell = new Map<string, ComparedElement[]>();
	for (const element of gone) {
		const key = keysAbout(element)[0]!;
		byCell.set(key, [...(byCell.get(key) ?? []), element]);
	}
	const claims = new Map<ComparedElement, ComparedElement[]>();
	const pairs: [ComparedElement, ComparedElement][] = [];
	for (const element of fresh) {
		const same = keysAbout(element)
			.flatMap((key) => byCell.get(key) ?? [])
			.filter(
				(other) =>
					isNear(element.boxM!.min, other.boxM!.min) &&
					isNear(element.boxM!.max, other.boxM!.max) &&
					(!areShapesCompared || haveSameCheckpoints(element, other)),
			);
		for (const other of same) claims.set(other, [...(claims.get(other) ?? []), element]);
		if (same.length === 1) pairs.push([element, same[0]!]);
	}
	return pairs.filter(([, other]) => claims.get(other)!.length === 1).map(([element, other]) => [element.globalId, other.globalId]);
}

/** With a body and a GlobalId of their own that the others do not have. */
function withoutThoseOf(elements: readonly ComparedElement[], others: readonly ComparedElement[]): ComparedElement[] {
	const there = new Set(others.map(({ globalId }) => globalId));
	const uses = new Map<string, number>();
	for (const { globalId } of elements) uses.set(globalId, (uses.get(globalId) ?? 0) + 1);
	return elements.filter(({ globalId, boxM }) => boxM !== null && globalId !== '' && uses.get(globalId) === 1 && !there.has(globalId));
}
