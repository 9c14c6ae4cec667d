import type { Vector3 } from '#shared/geometry/frame.ts';
import type { Adjustment } from './adjust.ts';
import { type FitObservations, observationCount } from './fit-observations.ts';
import type { Finding, FitInput } from './fit-schema.ts';
import { fitUnknowns, isLevelled, leastPairs } from './least-pairs.ts';
import { spreadOf } from './spread.ts';

/** Findings on where the targets stand, whatever was measured: they hold for a clean survey too. */

/** Second extent under this share of the first: nearly on a line. */
const NARROW = 0.05;
/** A turn known no better than this, radians: a millimetre each metre. */
const VAGUE_TURN = 1e-3;
/** A carried point this many times further from the middle of the targets than the furthest of them. */
const FAR = 1.5;
/** Targets seen from what is checked all within this angle. */
const ONE_SIDE = (120 * Math.PI) / 180;

/** `no-redundancy`, `weak-geometry`, `far-from-targets`. */
export function geometryFindings(input: FitInput, observations: FitObservations, adjustment: Adjustment): Finding[] {
	const findings: Finding[] = [];
	const redundancy = observationCount(observations) - fitUnknowns(input.fit).length;
	if (observations.count === leastPairs(input.fit) || redundancy === 0) {
		findings.push({
			code: 'no-redundancy',
			pairs: [],
			message: `With exactly ${observations.count} pair${observations.count === 1 ? '' : 's'} the residuals prove next to nothing: add a target, or hold the fit against an independent check.`,
			evidence: { pairs: observations.count, redundancy },
		});
	}
	if (input.fit !== 'height') {
		const weak = weakGeometry(observations, adjustment) ?? oneSided(input, observations);
		if (weak) findings.push(weak);
		const far = farFromTargets(input, observations);
		if (far) findings.push(far);
	}
	return findings;
}

function weakGeometry(observations: FitObservations, adjustment: Adjustment): Finding | null {
	const { kind, control, count } = observations;
	const { extents } = spreadOf(control, count);
	const turn = worstTurn(observations, adjustment);
	if (isLevelled(kind)) {
		const plan = spreadOf(control, count, true).extents[0];
		if (plan >= NARROW * extents[0] && turn < VAGUE_TURN) return null;
		return weak(
			`The targets stand within ${metres(2 * plan)} of one spot in plan, so the bearing is vague: add a target well apart from them.`,
			{
				reason: 'span',
				planSpanM: 2 * plan,
				spanM: 2 * extents[0],
				turnSigmaRad: turn,
			},
		);
	}
	if (extents[1] >= NARROW * extents[0] && turn < VAGUE_TURN) return null;
	return weak(
		`The targets lie nearly on a line, ${metres(2 * extents[1])} wide over ${metres(2 * extents[0])}, so the turn about it is vague: add a target off that line.`,
		{
			reason: 'nearly-on-a-line',
			widthM: 2 * extents[1],
			spanM: 2 * extents[0],
			turnSigmaRad: turn,
		},
	);
}

/** The largest σ of a turn, radians; 0 where no σ were given and it could only be guessed from the residuals. */
function worstTurn({ kind, sigmaGiven }: FitObservations, { cofactor }: Adjustment): number {
	if (!sigmaGiven) return 0;
	const unknowns = fitUnknowns(kind);
	// The trace bounds the largest of the three: enough to call a turn vague.
	return Math.sqrt(
		unknowns.reduce((sum, unknown, i) => (unknown >= 3 && unknown <= 5 ? sum + cofactor[i * unknowns.length + i]! : sum), 0),
	);
}

/** All targets to one side of the points to be carried. */
function oneSided(input: FitInput, observations: FitObservations): Finding | null {
	const carry = input.carry ?? [];
	if (carry.length === 0) return null;
	const { survey, surveyOrigin, count } = observations;
	const middle = [0, 1].map((k) => carry.reduce((sum, { survey: point }) => sum + point[k]! - surveyOrigin[k]!, 0) / carry.length);
	const bearings = Array.from({ length: count }, (_, i) => Math.atan2(survey[3 * i + 1]! - middle[1]!, survey[3 * i]! - middle[0]!)).sort(
		(a, b) => a - b,
	);
	const gaps = bearings.map((bearing, i) => (i + 1 < count ? bearings[i + 1]! : bearings[0]! + 2 * Math.PI) - bearing);
	const sector = 2 * Math.PI - Math.max(...gaps);
	if (count < 3 || sector > ONE_SIDE) return null;
	return weak('All targets lie to one side of the points to be checked: errors of the turn grow towards them. Add a target beyond.', {
		reason: 'one-sided',
		sectorDeg: (sector * 180) / Math.PI,
	});
}

function farFromTargets(input: FitInput, observations: FitObservations): Finding | null {
	const { survey, surveyOrigin, count, kind } = observations;
	const axes = isLevelled(kind) ? 2 : 3;
	let furthest = 0;
	for (let i = 0; i < count; i++) furthest = Math.max(furthest, Math.hypot(...survey.subarray(3 * i, 3 * i + axes)));
	const distance = (point: Vector3): number => Math.hypot(...point.slice(0, axes).map((value, k) => value - surveyOrigin[k]!));
	const far = (input.carry ?? [])
		.map(({ name, survey: point }) => ({ name, metres: distance(point) }))
		.filter(({ metres: away }) => away > FAR * furthest);
	if (far.length === 0) return null;
	const most = far.reduce((a, b) => (b.metres > a.metres ? b : a));
	const names = far.length === 1 ? `“${most.name}” lies` : `${far.length} points lie, the furthest “${most.name}”,`;
	return {
		code: 'far-from-targets',
		pairs: [],
		message: `${names} ${metres(most.metres)} from the middle of the targets, which reach ${metres(furthest)}: the fit is extended, and its uncertainty grows with it.`,
		evidence: { points: far, reachM: furthest },
	};
}

function weak(message: string, evidence: Record<string, unknown>): Finding {
	return { code: 'weak-geometry', pairs: [], message, evidence };
}

function metres(value: number): string {
	return value < 1 ? `${Math.max(1, Math.round(value * 1000))} mm` : `${value.toFixed(value < 10 ? 1 : 0)} m`;
}
