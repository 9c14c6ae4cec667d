import type { Vector3 } from '../../geometry/frame.ts';
import { deviationGradient } from '../measure-deviation.ts';
import { type DerivedFigure, type DerivedTerm, type MeasuredCheckpoint, scaled } from './linear-uncertainty.ts';

/** A measured point of one surface, in the surface's own two directions, metres, and its deviation from the design plane, mm. */
interface SurfacePoint {
	readonly entry: MeasuredCheckpoint;
	readonly a: number;
	readonly b: number;
	readonly mm: number;
}

/** The measured checkpoints of an element, by the plane that they are of: same kind, same normal, in one plane (5 mm). */
function surfaces(entries: readonly MeasuredCheckpoint[]): SurfacePoint[][] {
	const found: { normal: Vector3; place: Vector3; kind: string; points: SurfacePoint[] }[] = [];
	for (const entry of entries) {
		const { checkpoint, measured } = entry;
		if (checkpoint.characteristic === 'plan') continue;
		const gradient = deviationGradient(checkpoint);
		const normal = scaled(gradient, 1 / Math.hypot(...gradient));
		const kind = `${checkpoint.characteristic}${checkpoint.isSoffit ? ' soffit' : ''}`;
		const same = found.find((surface) => {
			const alike = surface.normal[0] * normal[0] + surface.normal[1] * normal[1] + surface.normal[2] * normal[2];
			const off = [0, 1, 2].reduce((sum, axis) => sum + (checkpoint.place[axis]! - surface.place[axis]!) * normal[axis]!, 0);
			return surface.kind === kind && alike > 0.999999 && Math.abs(off) < 0.005;
		});
		const surface = same ?? { normal, place: checkpoint.place, kind, points: [] };
		if (same === undefined) found.push(surface);
		const [u, v] = inPlane(surface.normal);
		const from = [0, 1, 2].map((axis) => measured.measured[axis]! - surface.place[axis]!);
		surface.points.push({
			entry,
			a: from[0]! * u[0] + from[1]! * u[1] + from[2]! * u[2],
			b: from[0]! * v[0] + from[1]! * v[1] + from[2]! * v[2],
			mm: measured.deviationMm,
		});
	}
	return found.map(({ points }) => points);
}

/** Two unit vectors in the plane of a normal. */
function inPlane([x, y, z]: Vector3): [Vector3, Vector3] {
	const across: Vector3 = Math.abs(z) < 0.9 ? [-y, x, 0] : [0, -z, y];
	const length = Math.hypot(...across);
	const u = scaled(across, 1 / length);
	return [u, [y * u[2] - z * u[1], z * u[0] - x * u[2], x * u[1] - y * u[0]]];
}

/** How far beside a straightedge a point still counts as under it: a tenth of its span, at most 10 cm. */
const besideShare = 0.1;
const besideMostM = 0.1;

/** Surfaces with more points than this are looked at by the first so many: triples grow fast. */
const mostPoints = 400;

/**
 * The greatest gap under a straightedge of the stated length laid on two high points of a surface, as DIN 18202 means it: between two points no further
 * apart than the straightedge is long, with none between them above it. Millimetres. Gaps between measured points are not seen.
 */
export function straightedgeFigures(elementId: string, entries: readonly MeasuredCheckpoint[], straightedgeM: number): DerivedFigure[] {
	return surfaces(entries).flatMap((all) => {
		const points = all.slice(0, mostPoints);
		let worst: { gapMm: number; terms: DerivedTerm[] } | null = null;
		for (let i = 0; i < points.length; i++) {
			for (let j = 0; j < i; j++) {
				const [p, q] = [points[i]!, points[j]!];
				const spanM = Math.hypot(q.a - p.a, q.b - p.b);
				if (spanM > straightedgeM || spanM < 0.05) continue;
				const found = deepestUnder(points, p, q, spanM);
				if (found !== null && found.gapMm > (worst?.gapMm ?? -1)) {
					const { r, share } = found;
					const terms = (
						[
							[p, 1 - share],
							[q, share],
							[r, -1],
						] as const
					).map(([point, weight]) => ({ entry: point.entry, weight: scaled(deviationGradient(point.entry.checkpoint), weight) }));
					// Under an overhead surface or behind a face the straightedge lies on the outer side: all weights keep their sign with the deviation.
					worst = { gapMm: found.gapMm, terms };
				}
			}
		}
		if (worst === null) return [];
		return [
			{
				elementId,
				label: `greatest gap under a straightedge of ${straightedgeM} m`,
				deviationMm: worst.gapMm,
				terms: worst.terms,
				from: all.map(({ entry }) => entry.checkpoint.id),
			},
		];
	});
}

/** The point furthest under the straightedge from p to q; null where none lies under it or one stands above it. A soffit is looked at from below. */
function deepestUnder(
	points: readonly SurfacePoint[],
	p: SurfacePoint,
	q: SurfacePoint,
	spanM: number,
): { gapMm: number; r: SurfacePoint; share: number } | null {
	const isOverhead = p.entry.checkpoint.isSoffit;
	let deepest: { gapMm: number; r: SurfacePoint; share: number } | null = null;
	for (const r of points) {
		if (r === p || r === q) continue;
		const along = ((r.a - p.a) * (q.a - p.a) + (r.b - p.b) * (q.b - p.b)) / (spanM * spanM);
		if (along <= 0 || along >= 1) continue;
		const beside = Math.abs((r.a - p.a) * (q.b - p.b) - (r.b - p.b) * (q.a - p.a)) / spanM;
		if (beside > Math.min(besideMostM, besideShare * spanM)) continue;
		const under = (1 - along) * p.mm + along * q.mm - r.mm;
		const gapMm = isOverhead ? -under : under;
		if (gapMm < 0) return null;
		if (gapMm > (deepest?.gapMm ?? -1)) deepest = { gapMm, r, share: along };
	}
	return deepest;
}

/**
 * The band about the best-fit plane of a surface: highest less lowest residual of a least-squares plane through the deviations. Millimetres; at least four
 * points, not on a line. Not the straightedge's figure, and never shown as that.
 */
export function bestFitFigures(elementId: string, entries: readonly MeasuredCheckpoint[]): DerivedFigure[] {
	return surfaces(entries).flatMap((points) => {
		if (points.length < 4) return [];
		const n = points.length;
		const mean = (value: (point: SurfacePoint) => number): number => points.reduce((sum, point) => sum + value(point), 0) / n;
		const [ma, mb] = [mean(({ a }) => a), mean(({ b }) => b)];
		let [aa, ab, bb] = [0, 0, 0];
		for (const { a, b } of points) {
			aa += (a - ma) ** 2;
			ab += (a - ma) * (b - mb);
			bb += (b - mb) ** 2;
		}
		const determinant = aa * bb - ab * ab;
		if (determinant < 1e-6 * (aa + bb) ** 2 || aa + bb < 1e-4) return [];
		/** Row of the hat matrix: what each point's deviation adds to the plane's value at `at`. */
		const hat = (at: SurfacePoint, from: SurfacePoint): number => {
			const [da, db, ea, eb] = [at.a - ma, at.b - mb, from.a - ma, from.b - mb];
			return 1 / n + (da * (bb * ea - ab * eb) + db * (aa * eb - ab * ea)) / determinant;
		};
		const residuals = points.map((at) => at.mm - points.reduce((sum, from) => sum + hat(at, from) * from.mm, 0));
		const highest = residuals.indexOf(Math.max(...residuals));
		const lowest = residuals.indexOf(Math.min(...residuals));
		const terms = points.map((from, index): DerivedTerm => {
			const share = (index === highest ? 1 : 0) - (index === lowest ? 1 : 0) - hat(points[highest]!, from) + hat(points[lowest]!, from);
			return { entry: from.entry, weight: scaled(deviationGradient(from.entry.checkpoint), share) };
		});
		return [
			{
				elementId,
				label: 'band about the best-fit plane',
				deviationMm: residuals[highest]! - residuals[lowest]!,
				terms,
				from: points.map(({ entry }) => entry.checkpoint.id),
			},
		];
	});
}
