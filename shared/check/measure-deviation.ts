import { coverageFactor } from '../fit/carry-point.ts';
import type { Matrix3, Vector3 } from '../geometry/frame.ts';
import { principalAxes, sigmaAlong } from '../geometry/plan-covariance.ts';
import type { CheckInputCheckpoint } from './check-input.ts';
import type { Deviation } from './check-schema.ts';
import { meet } from './checkpoint-reach.ts';
import type { Observation } from './observation.ts';

/** What one observation says of one checkpoint. Millimetres; `measured` in metres, design frame. */
export interface MeasuredDeviation {
	readonly measured: Vector3;
	readonly deviationMm: number;
	/** Plan only: as-built less design, east and north. */
	readonly offsetMm: [number, number] | null;
	/** Plan only: of the offset, so that U = 2u. */
	readonly covarianceMm2: [[number, number], [number, number]] | null;
	readonly partsMm: NonNullable<Deviation['standardUncertaintyPartsMm']>;
	/** U along the direction; in plan of the long axis. Null where a part is not known. */
	readonly expandedUncertaintyMm: number | null;
}

function quadratic(matrix: Matrix3, [x, y, z]: Vector3): number {
	let sum = 0;
	const v = [x, y, z];
	for (let i = 0; i < 3; i++) for (let j = 0; j < 3; j++) sum += v[i]! * matrix[i]![j]! * v[j]!;
	return Math.max(0, sum);
}

/** The direction that a deviation changes along: the face's normal; for a level the design surface's (−a, −b, 1). */
export function deviationGradient(checkpoint: CheckInputCheckpoint): Vector3 {
	if (checkpoint.characteristic === 'face') return checkpoint.direction ?? [0, 0, 1];
	const [a, b] = checkpoint.surface ?? [0, 0, 0];
	return [0 - a, 0 - b, 1];
}

/**
 * The deviation with its uncertainty: u² = u_fit² + u_point² + u_common², U = k·u (GUM, JCGM 100; DOMAIN.md). k is 2, or Student's factor where the
 * fit has no σ; then the covariance in plan is widened by (k/2)², so that `judge`, which knows U = 2u, sees the same U.
 * The caller has made sure that the checkpoint is within reach.
 */
export function measureDeviation(checkpoint: CheckInputCheckpoint, observation: Observation): MeasuredDeviation {
	const { setup, field, isHeightsOnly } = observation.setup;
	const carried: Vector3 = isHeightsOnly ? [checkpoint.place[0], checkpoint.place[1], observation.carried[2]] : observation.carried;
	const meeting = meet(checkpoint, carried, observation.offsetMm);
	const factor = coverageFactor(setup.fit);
	const fitCovariance = field.isKnown ? field.at(observation.surveyPoint) : null;
	const pointCovariance = observation.pointCovariance();
	const { commonMm } = setup;
	if (checkpoint.characteristic === 'plan') {
		const offsetMm: [number, number] = [
			(meeting.measured[0] - checkpoint.place[0]) * 1000,
			(meeting.measured[1] - checkpoint.place[1]) * 1000,
		];
		return {
			measured: meeting.measured,
			deviationMm: meeting.deviationM * 1000,
			offsetMm,
			...planUncertainty(fitCovariance, pointCovariance, commonMm, factor),
		};
	}
	const gradient = deviationGradient(checkpoint);
	const fitMm = fitCovariance === null ? null : Math.sqrt(quadratic(fitCovariance, gradient)) * 1000;
	const pointMm = pointCovariance === null ? null : Math.sqrt(quadratic(pointCovariance, gradient)) * 1000;
	return {
		measured: meeting.measured,
		deviationMm: meeting.deviationM * 1000,
		offsetMm: null,
		covarianceMm2: null,
		partsMm: { fit: fitMm, point: pointMm, common: commonMm },
		expandedUncertaintyMm: fitMm === null || pointMm === null || factor === null ? null : factor * Math.hypot(fitMm, pointMm, commonMm),
	};
}

/** What is shared along any direction counts along every direction in plan: commonMm² on the diagonal. */
function planUncertainty(
	fitCovariance: Matrix3 | null,
	pointCovariance: Matrix3 | null,
	commonMm: number,
	factor: number | null,
): Pick<MeasuredDeviation, 'covarianceMm2' | 'partsMm' | 'expandedUncertaintyMm'> {
	const plan = (matrix: Matrix3 | null): [[number, number], [number, number]] | null =>
		matrix === null
			? null
			: [
					[matrix[0][0] * 1e6, matrix[0][1] * 1e6],
					[matrix[1][0] * 1e6, matrix[1][1] * 1e6],
				];
	const fit = plan(fitCovariance);
	const point = plan(pointCovariance);
	if (fit === null || point === null || factor === null) {
		const partsMm = { fit: fit && principalAxes(fit).longSigma, point: point && principalAxes(point).longSigma, common: commonMm };
		return { covarianceMm2: null, partsMm, expandedUncertaintyMm: null };
	}
	const widening = (factor / 2) ** 2;
	const entry = (i: 0 | 1, j: 0 | 1): number => widening * (fit[i][j] + point[i][j] + (i === j ? commonMm * commonMm : 0));
	const cross = (entry(0, 1) + entry(1, 0)) / 2;
	const covarianceMm2: [[number, number], [number, number]] = [
		[entry(0, 0), cross],
		[cross, entry(1, 1)],
	];
	const { long, longSigma } = principalAxes(covarianceMm2);
	return {
		covarianceMm2,
		partsMm: { fit: sigmaAlong(fit, long), point: sigmaAlong(point, long), common: commonMm },
		expandedUncertaintyMm: 2 * longSigma,
	};
}
