import type { Vector3 } from '../geometry/frame.ts';
import { sigmaAlong } from '../geometry/plan-covariance.ts';
import type { Deviation } from './check-schema.ts';

/** What of a deviation it takes to hold it against another of the same checkpoint. */
export interface Comparable
	extends Readonly<Pick<Deviation, 'characteristic' | 'deviationMm' | 'offsetMm' | 'covarianceMm2' | 'expandedUncertaintyMm'>> {
	readonly place: Vector3;
	readonly direction: Vector3 | null;
}

/** The way a deviation counts; null in plan. */
function wayOf({ characteristic, direction }: Comparable): readonly [number, number, number] {
	return characteristic === 'level' ? [0, 0, 1] : (direction ?? [0, 0, 1]);
}

/**
 * How far apart two measurements of one checkpoint are and what U the difference has, millimetres; null where that cannot be said (a U is
 * unknown, or the design turned its face). Where the design moved between the revisions, its move is taken out: what is compared is where
 * the work was found. Source: JCGM 100:2008, 5.1: independent measurements, variances added.
 * A control that both share makes them alike, and the difference smaller than this says; never larger.
 */
export function apartMm(one: Comparable, other: Comparable): { apartMm: number; togetherMm: number } | null {
	if (one.deviationMm === null || other.deviationMm === null) return null;
	if (one.offsetMm !== null && other.offsetMm !== null) {
		if (one.covarianceMm2 === null || other.covarianceMm2 === null) return null;
		const apart = [0, 1].map((k) => other.offsetMm![k]! - one.offsetMm![k]! + (other.place[k]! - one.place[k]!) * 1000) as [number, number];
		const [a, b] = [one.covarianceMm2, other.covarianceMm2];
		const sum = [
			[a[0][0] + b[0][0], a[0][1] + b[0][1]],
			[a[1][0] + b[1][0], a[1][1] + b[1][1]],
		] as const;
		return { apartMm: Math.hypot(...apart), togetherMm: 2 * sigmaAlong(sum, apart) };
	}
	if (one.expandedUncertaintyMm === null || other.expandedUncertaintyMm === null) return null;
	const [way, otherWay] = [wayOf(one), wayOf(other)];
	const cosine = way[0] * otherWay[0] + way[1] * otherWay[1] + way[2] * otherWay[2];
	if (cosine < 0.9999) return null;
	const movedMm = 1000 * way.reduce((sum, part, k) => sum + part * (other.place[k]! - one.place[k]!), 0);
	return {
		apartMm: Math.abs(other.deviationMm - one.deviationMm + movedMm),
		togetherMm: Math.hypot(one.expandedUncertaintyMm, other.expandedUncertaintyMm),
	};
}
