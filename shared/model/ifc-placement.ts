import type { Vector3 } from '../geometry/frame.ts';
import { type Affine, affineFromAxes, compose, cross, identityAffine, transform } from './affine.ts';
import type { Part21File } from './part21.ts';
import { numbersOf, refOf } from './part21-value.ts';

/** Placements of ISO 16739-1 in double precision, file units. */

/** An IfcCartesianPoint or IfcDirection; a missing third coordinate is 0. Null where it is not there or not finite. */
export function readTriple(file: Part21File, number: number | null): Vector3 | null {
	if (number === null) return null;
	const numbers = numbersOf(file.entity(number)?.args[0]);
	if (!numbers || numbers.length < 1) return null;
	return [numbers[0]!, numbers[1] ?? 0, numbers[2] ?? 0];
}

/** An IfcAxis2Placement3D or …2D as an affine map; null where it contradicts itself (parallel or empty directions, NaN). */
export function readAxisPlacement(file: Part21File, number: number | null): Affine | null {
	const entity = number === null ? null : file.entity(number);
	if (!entity) return null;
	const origin = readTriple(file, refOf(entity.args[0]));
	if (!origin) return null;
	if (entity.type === 'IFCAXIS2PLACEMENT2D') {
		const direction = readTriple(file, refOf(entity.args[1])) ?? [1, 0, 0];
		return affineFromAxes(origin, [0, 0, 1], direction);
	}
	if (entity.type !== 'IFCAXIS2PLACEMENT3D') return null;
	const axisRef = refOf(entity.args[1]);
	const directionRef = refOf(entity.args[2]);
	const axis: Vector3 | null = axisRef === null ? [0, 0, 1] : readTriple(file, axisRef);
	const direction: Vector3 | null = directionRef === null ? [1, 0, 0] : readTriple(file, directionRef);
	if (!axis || !direction) return null;
	const placed = affineFromAxes(origin, axis, direction);
	// The standard's own default where only an axis along X is given (IfcBuildAxes, IfcFirstProjAxis).
	return placed ?? (directionRef === null ? affineFromAxes(origin, axis, [0, 1, 0]) : null);
}

type GridPlacementReader = (number: number) => Affine | null;

/** A placement worked out: where it is, whether it hangs on a grid or an alignment, and what is wrong with it. */
export type ReadPlacement = {
	matrix: Affine;
	/** The IfcGridPlacement in its chain, and the chain's part below it. */
	gridPlacement: number | null;
	/** The IfcLinearPlacement in its chain. */
	linearPlacement: number | null;
	fault: 'cycle' | 'missing' | 'directions' | null;
};

/**
 * Reads placement chains with a memory; no recursion, so that chains of any depth are followed, and cycles are found.
 * `readGridPlacement` gives an IfcGridPlacement's own matrix in file units, relative to what `PlacementRelTo` says (IFC 4.3) or absolute.
 */
export function placementReader(file: Part21File, readGridPlacement: GridPlacementReader): (number: number | null) => ReadPlacement {
	const known = new Map<number, ReadPlacement>();
	const root: ReadPlacement = { matrix: identityAffine, gridPlacement: null, linearPlacement: null, fault: null };

	const own = (number: number, parent: ReadPlacement): ReadPlacement => {
		const entity = file.entity(number);
		if (!entity) return { ...root, fault: 'missing' };
		if (entity.type === 'IFCGRIDPLACEMENT') {
			const matrix = readGridPlacement(number);
			return { matrix: matrix ?? identityAffine, gridPlacement: number, linearPlacement: null, fault: matrix ? null : 'missing' };
		}
		if (entity.type === 'IFCLINEARPLACEMENT') {
			const cartesian = entity.args.map(refOf).find((ref) => ref !== null && file.typeOf(ref) === 'IFCAXIS2PLACEMENT3D') ?? null;
			const matrix = readAxisPlacement(file, cartesian);
			return {
				matrix: compose(parent.matrix, matrix ?? identityAffine),
				gridPlacement: null,
				linearPlacement: number,
				fault: parent.fault,
			};
		}
		const relative = readAxisPlacement(file, refOf(entity.args[1]));
		return {
			matrix: compose(parent.matrix, relative ?? identityAffine),
			gridPlacement: parent.gridPlacement,
			linearPlacement: parent.linearPlacement,
			fault: parent.fault ?? (relative ? null : 'directions'),
		};
	};

	return (asked) => {
		if (asked === null) return root;
		const chain: number[] = [];
		const onChain = new Set<number>();
		let number: number | null = asked;
		let parent = root;
		while (number !== null) {
			const before = known.get(number);
			if (before) {
				parent = before;
				break;
			}
			if (onChain.has(number)) {
				parent = { ...root, fault: 'cycle' };
				break;
			}
			chain.push(number);
			onChain.add(number);
			const entity = file.entity(number);
			const hasParent =
				entity &&
				(entity.type === 'IFCLOCALPLACEMENT' ||
					(entity.type === 'IFCLINEARPLACEMENT' && file.typeOf(refOf(entity.args[0]) ?? -1)?.endsWith('PLACEMENT')));
			number = hasParent ? refOf(entity.args[0]) : null;
		}
		while (chain.length > 0) {
			const next = chain.pop()!;
			parent = own(next, parent);
			known.set(next, parent);
		}
		return parent;
	};
}

/** The direction an affine map gives to X, seen in plan, and its origin. */
export function planFrameOf(matrix: Affine): { origin: Vector3; x: Vector3; y: Vector3 } {
	const origin = transform(matrix, [0, 0, 0]);
	const x: Vector3 = [matrix[0]!, matrix[4]!, matrix[8]!];
	const z: Vector3 = [matrix[2]!, matrix[6]!, matrix[10]!];
	return { origin, x, y: cross(z, x) };
}
