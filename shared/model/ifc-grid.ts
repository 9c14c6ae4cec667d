import type { Vector3 } from '../geometry/frame.ts';
import { type Affine, affineFromAxes, compose, cross, subtract, transform, unit } from './affine.ts';
import { placementReader, readAxisPlacement, readTriple } from './ifc-placement.ts';
import type { GridAxis } from './model-schema.ts';
import type { Part21File } from './part21.ts';
import { numberOf, numbersOf, type Part21Value, refOf, refsOf, textOf } from './part21-value.ts';

/** IfcGrid: its axes as polylines in plan, and the placements that hang on their intersections (ISO 16739-1). */

type Axis = { number: number; tag: string; direction: 'u' | 'v' | 'w'; points: Vector3[]; grid: number };

/** Points of a circle arc, at least one each 5°, the ends exact. File units, frame of the curve. */
function arcPoints(file: Part21File, circle: number, fromRad: number, sweepRad: number): Vector3[] {
	const entity = file.entity(circle);
	const place = readAxisPlacement(file, refOf(entity?.args[0]));
	const radius = numberOf(entity?.args[1]);
	if (!place || radius === null) return [];
	const steps = Math.max(1, Math.min(360, Math.ceil(Math.abs(sweepRad) / (Math.PI / 36))));
	const points: Vector3[] = [];
	for (let i = 0; i <= steps; i++) {
		const angle = fromRad + (sweepRad * i) / steps;
		points.push(transform(place, [radius * Math.cos(angle), radius * Math.sin(angle), 0]));
	}
	return points;
}

function trimmedPoints(file: Part21File, args: readonly Part21Value[], angleUnitRad: number): Vector3[] {
	const basis = file.entity(refOf(args[0]) ?? -1);
	if (!basis) return [];
	const trims = [args[1], args[2]].map((list) => {
		const members = Array.isArray(list) ? list : [list];
		const point = members.map((member) => readTriple(file, refOf(member))).find((triple) => triple !== null) ?? null;
		const parameter = members.map((member) => numberOf(member)).find((number) => number !== null) ?? null;
		return { point, parameter };
	});
	const [from, to] = trims;
	if (!from || !to) return [];
	if (basis.type === 'IFCLINE') {
		const origin = readTriple(file, refOf(basis.args[0]));
		const vector = file.entity(refOf(basis.args[1]) ?? -1);
		const direction = readTriple(file, refOf(vector?.args[0]));
		const magnitude = numberOf(vector?.args[1]) ?? 1;
		const along = (parameter: number): Vector3 | null => {
			const u = direction ? unit(direction) : null;
			return origin && u
				? [origin[0] + u[0] * magnitude * parameter, origin[1] + u[1] * magnitude * parameter, origin[2] + u[2] * magnitude * parameter]
				: null;
		};
		const ends = [from, to].map((trim) => trim.point ?? (trim.parameter === null ? null : along(trim.parameter)));
		return ends.filter((point): point is Vector3 => point !== null);
	}
	if (basis.type === 'IFCCIRCLE') {
		const place = readAxisPlacement(file, refOf(basis.args[0]));
		if (!place) return [];
		const angleOf = (trim: { point: Vector3 | null; parameter: number | null }): number | null => {
			if (trim.parameter !== null) return trim.parameter * angleUnitRad;
			if (!trim.point) return null;
			const r = subtract(trim.point, [place[3]!, place[7]!, place[11]!]);
			return Math.atan2(r[0] * place[1]! + r[1] * place[5]! + r[2] * place[9]!, r[0] * place[0]! + r[1] * place[4]! + r[2] * place[8]!);
		};
		const start = angleOf(from);
		const end = angleOf(to);
		if (start === null || end === null) return [];
		const isSame = args[3] === undefined || !(typeof args[3] === 'object' && args[3] !== null && 'name' in args[3] && args[3].name === 'F');
		const turn = 2 * Math.PI;
		const sweep = isSame ? (((end - start) % turn) + turn) % turn : -((((start - end) % turn) + turn) % turn);
		return arcPoints(file, refOf(args[0])!, start, sweep === 0 ? turn : sweep);
	}
	return [];
}

function curvePoints(file: Part21File, number: number | null, angleUnitRad: number): Vector3[] {
	const curve = number === null ? null : file.entity(number);
	if (!curve) return [];
	if (curve.type === 'IFCPOLYLINE')
		return refsOf(curve.args[0])
			.map((ref) => readTriple(file, ref))
			.filter((point): point is Vector3 => point !== null);
	if (curve.type === 'IFCINDEXEDPOLYCURVE') {
		const list = file.entity(refOf(curve.args[0]) ?? -1)?.args[0];
		return (Array.isArray(list) ? list : []).flatMap((member): Vector3[] => {
			const numbers = numbersOf(member);
			return numbers && numbers.length >= 2 ? [[numbers[0]!, numbers[1]!, numbers[2] ?? 0]] : [];
		});
	}
	if (curve.type === 'IFCTRIMMEDCURVE') return trimmedPoints(file, curve.args, angleUnitRad);
	if (curve.type === 'IFCCIRCLE') return arcPoints(file, curve.number, 0, 2 * Math.PI);
	if (curve.type === 'IFCLINE') {
		const vector = file.entity(refOf(curve.args[1]) ?? -1);
		const origin = readTriple(file, refOf(curve.args[0]));
		const direction = readTriple(file, refOf(vector?.args[0]));
		const magnitude = numberOf(vector?.args[1]) ?? 1;
		const u = direction ? unit(direction) : null;
		return origin && u ? [origin, [origin[0] + u[0] * magnitude, origin[1] + u[1] * magnitude, origin[2] + u[2] * magnitude]] : [];
	}
	return [];
}

const flat = (a: Vector3): Vector3 => [a[0], a[1], 0];

/** Where two polylines cross in plan, their first and last pieces prolonged where they do not meet inside; each shifted to its left by an offset. With the tangent of the first. */
function crossing(
	first: readonly Vector3[],
	second: readonly Vector3[],
	offsetFirst: number,
	offsetSecond: number,
): { point: Vector3; tangent: Vector3 } | null {
	let best: { point: Vector3; tangent: Vector3; outside: number } | null = null;
	for (let i = 0; i + 1 < first.length; i++) {
		const d1 = unit(flat(subtract(first[i + 1]!, first[i]!)));
		if (!d1) continue;
		const a: Vector3 = [first[i]![0] - d1[1] * offsetFirst, first[i]![1] + d1[0] * offsetFirst, 0];
		const length1 = Math.hypot(first[i + 1]![0] - first[i]![0], first[i + 1]![1] - first[i]![1]);
		for (let j = 0; j + 1 < second.length; j++) {
			const d2 = unit(flat(subtract(second[j + 1]!, second[j]!)));
			if (!d2) continue;
			const b: Vector3 = [second[j]![0] - d2[1] * offsetSecond, second[j]![1] + d2[0] * offsetSecond, 0];
			const length2 = Math.hypot(second[j + 1]![0] - second[j]![0], second[j + 1]![1] - second[j]![1]);
			const determinant = cross(d1, d2)[2];
			if (Math.abs(determinant) < 1e-9) continue;
			const between = subtract(b, a);
			const s = cross(between, d2)[2] / determinant;
			const t = cross(between, d1)[2] / determinant;
			const outside = Math.max(0, -s, s - length1) + Math.max(0, -t, t - length2);
			if (!best || outside < best.outside) best = { point: [a[0] + d1[0] * s, a[1] + d1[1] * s, first[i]![2]], tangent: d1, outside };
		}
	}
	return best;
}

export type ModelGrid = {
	axes: GridAxis[];
	/** An IfcGridPlacement as a matrix in file units; null where it cannot be worked out. */
	readGridPlacement: (number: number) => Affine | null;
};

/** Reads all IfcGrid of a file. `metresPerUnit` turns the axes into metres; `angleUnitRad`: radians per plane angle unit of the file. */
export function readGrids(file: Part21File, metresPerUnit: number, angleUnitRad: number): ModelGrid {
	// A grid does not itself stand on a grid: its chain is followed without.
	const placementOf = placementReader(file, () => null);
	const axes: Axis[] = [];
	const gridMatrix = new Map<number, Affine>();
	for (const number of file.ofType('IFCGRID')) {
		const grid = file.entity(number);
		if (!grid) continue;
		gridMatrix.set(number, placementOf(refOf(grid.args[5])).matrix);
		(['u', 'v', 'w'] as const).forEach((direction, at) => {
			for (const ref of refsOf(grid.args[7 + at])) {
				const axis = file.entity(ref);
				const points = curvePoints(file, refOf(axis?.args[1]), angleUnitRad);
				const senseArg = axis?.args[2];
				const isReversed = typeof senseArg === 'object' && senseArg !== null && 'name' in senseArg && senseArg.name === 'F';
				if (axis && points.length >= 2)
					axes.push({
						number: ref,
						tag: textOf(axis.args[0]) ?? '',
						direction,
						points: isReversed ? points.reverse() : points,
						grid: number,
					});
			}
		});
	}
	const byNumber = new Map(axes.map((axis) => [axis.number, axis]));

	const intersection = (ref: number | null): { point: Vector3; tangent: Vector3; grid: number } | null => {
		const entity = ref === null ? null : file.entity(ref);
		if (entity?.type !== 'IFCVIRTUALGRIDINTERSECTION') return null;
		const [first, second] = refsOf(entity.args[0]).map((axis) => byNumber.get(axis));
		const offsets = numbersOf(entity.args[1]) ?? [];
		if (!first || !second) return null;
		const met = crossing(first.points, second.points, offsets[0] ?? 0, offsets[1] ?? 0);
		return met && { point: [met.point[0], met.point[1], met.point[2] + (offsets[2] ?? 0)], tangent: met.tangent, grid: first.grid };
	};

	const readGridPlacement = (number: number): Affine | null => {
		const entity = file.entity(number);
		if (!entity) return null;
		// IFC 4.3 put PlacementRelTo before the two others.
		const refs = entity.args.map(refOf);
		const at = refs.findIndex((ref) => ref !== null && file.typeOf(ref) === 'IFCVIRTUALGRIDINTERSECTION');
		const location = at < 0 ? null : intersection(refs[at]!);
		if (!location) return null;
		const directionRef = refs[at + 1] ?? null;
		const other = intersection(directionRef);
		const explicit = other || directionRef === null ? null : readTriple(file, directionRef);
		const x = other ? subtract(other.point, location.point) : (explicit ?? location.tangent);
		const own = affineFromAxes(location.point, [0, 0, 1], x);
		const grid = gridMatrix.get(location.grid);
		return own && grid ? compose(grid, own) : null;
	};

	const seen = new Set<string>();
	const inMetres: GridAxis[] = [];
	for (const axis of axes) {
		const matrix = gridMatrix.get(axis.grid)!;
		const points = axis.points.map((point): [number, number] => {
			const placed = transform(matrix, point);
			return [placed[0] * metresPerUnit, placed[1] * metresPerUnit];
		});
		// Programs that write one grid for each storey repeat every axis.
		const key = `${axis.tag}|${points.map((point) => point.map((value) => value.toFixed(3)).join(' ')).join('|')}`;
		if (seen.has(key) || !points.flat().every((value) => Number.isFinite(value) && Math.abs(value) < 1e8)) continue;
		seen.add(key);
		inMetres.push({ tag: axis.tag, direction: axis.direction, points });
	}
	return { axes: inMetres, readGridPlacement };
}
