import type { CheckInputPoint, CheckInputSetup } from '#shared/check/check-input.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitPair } from '#shared/fit/fit-schema.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import type { Checkpoint } from '#shared/model/model-schema.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';

/**
 * A survey of work whose every deviation is known: the checkpoints of a model displaced, and observed from many set-ups, each turned and shifted
 * in its own way, with errors drawn from known σ. What `runCheck` makes of it shows whether deviations and their U are right.
 */

/** σ that the errors are drawn from and that are told, metres; the common part in millimetres, one draw a set-up. */
export const simulatedNoise = {
	/** Unlike along the survey axes, so that a covariance carried over wrongly shows. */
	pointM: [0.002, 0.003, 0.0012] as Vector3,
	targetM: [0.001, 0.0015, 0.0008] as Vector3,
	controlM: [0.001, 0.001, 0.0005] as Vector3,
	commonMm: 1,
};

const limitMm = 25;

/** ±25 mm about faces and levels, 25 mm about marks, by twice u; sections likewise. */
export const simulatedSheet: ToleranceSheet = {
	name: 'Closed loop',
	decision: 'guarded',
	rules: [
		{ id: 'plan', match: { characteristic: 'plan' }, lowerMm: null, upperMm: limitMm, shape: 'disc' },
		{ id: 'section', match: { characteristic: 'section' }, lowerMm: -limitMm, upperMm: limitMm },
		{ id: 'any', match: {}, lowerMm: -limitMm, upperMm: limitMm },
	],
};

/** How a checkpoint was displaced: well inside its limit, well outside, or on it to the micrometre. */
export type Planted = 'inside' | 'outside' | 'on-limit';

export interface Displaced {
	readonly planted: Planted;
	/** Along the direction of the checkpoint; of a mark how far it is off. */
	readonly deviationMm: number;
	/** Marks alone: east and north. */
	readonly offsetMm: readonly [number, number] | null;
	/** Where it was built, design frame. */
	readonly builtM: Vector3;
}

export interface SimulatedSetup extends CheckInputSetup {
	/** Targets as observed and control as given, for who writes them to files. */
	readonly pairs: readonly FitPair[];
}

export interface SimulatedSurvey {
	readonly displaced: readonly Displaced[];
	readonly setups: readonly SimulatedSetup[];
	readonly points: readonly CheckInputPoint[];
}

type Draw = () => number;

/** Box & Muller 1958. */
const normalDraw = (uniform: Draw): Draw => {
	return () => Math.sqrt(-2 * Math.log(1 - uniform())) * Math.cos(2 * Math.PI * uniform());
};

const plus = (a: Vector3, b: Vector3): Vector3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
const errors = (sigma: Vector3, draw: Draw): Vector3 => [sigma[0] * draw(), sigma[1] * draw(), sigma[2] * draw()];

/** How far a checkpoint is displaced, mm: of four two well inside, one well outside, one on the limit; both signs. */
function plantedAt(index: number, uniform: Draw): { planted: Planted; mm: number } {
	const sign = uniform() < 0.5 ? -1 : 1;
	if (index % 4 === 2) return { planted: 'outside', mm: sign * (45 + 10 * uniform()) };
	if (index % 4 === 3) return { planted: 'on-limit', mm: sign * limitMm };
	return { planted: 'inside', mm: sign * 8 * uniform() };
}

/** Displaced as said, and up to 20 mm beside the place as well, which is no part of the deviation. */
function displace({ characteristic, place, direction, surface }: Checkpoint, index: number, uniform: Draw): Displaced {
	const { planted, mm } = plantedAt(index, uniform);
	const beside = (): number => 0.02 * (2 * uniform() - 1);
	const at: Vector3 = [place[0], place[1], place[2]];
	if (characteristic === 'plan') {
		const bearing = 2 * Math.PI * uniform();
		const offsetMm: [number, number] = [Math.abs(mm) * Math.cos(bearing), Math.abs(mm) * Math.sin(bearing)];
		const builtM = plus(at, [offsetMm[0] / 1000, offsetMm[1] / 1000, beside()]);
		return { planted, deviationMm: Math.abs(mm), offsetMm, builtM };
	}
	if (characteristic === 'level') {
		const [x, y] = [at[0] + beside(), at[1] + beside()];
		const designM = surface === null ? at[2] : surface[0] * x + surface[1] * y + surface[2];
		return { planted, deviationMm: mm, offsetMm: null, builtM: [x, y, designM + mm / 1000] };
	}
	const [a, b, c] = direction!;
	const any: Vector3 = [beside(), beside(), beside()];
	const along = any[0] * a + any[1] * b + any[2] * c;
	const move = (normal: number, part: number): number => part + normal * (mm / 1000 - along);
	return { planted, deviationMm: mm, offsetMm: null, builtM: plus(at, [move(a, any[0]), move(b, any[1]), move(c, any[2])]) };
}

/** A turn as rows: about the vertical alone, or any (a uniform unit quaternion: Shoemake 1992). */
function turnOf(isLevelled: boolean, uniform: Draw): readonly [Vector3, Vector3, Vector3] {
	if (isLevelled) {
		const yaw = 2 * Math.PI * uniform();
		const [s, c] = [Math.sin(yaw), Math.cos(yaw)];
		return [
			[c, -s, 0],
			[s, c, 0],
			[0, 0, 1],
		];
	}
	const [u, v, w] = [uniform(), 2 * Math.PI * uniform(), 2 * Math.PI * uniform()];
	const [x, y, z, q] = [
		Math.sqrt(1 - u) * Math.sin(v),
		Math.sqrt(1 - u) * Math.cos(v),
		Math.sqrt(u) * Math.sin(w),
		Math.sqrt(u) * Math.cos(w),
	];
	return [
		[1 - 2 * (y * y + z * z), 2 * (x * y - z * q), 2 * (x * z + y * q)],
		[2 * (x * y + z * q), 1 - 2 * (x * x + z * z), 2 * (y * z - x * q)],
		[2 * (x * z - y * q), 2 * (y * z + x * q), 1 - 2 * (x * x + y * y)],
	];
}

/** Eight targets about what is checked, at two heights and not on one circle. Design frame, metres. */
function targetPlaces(checkpoints: readonly Checkpoint[]): Vector3[] {
	const low: number[] = [];
	const high: number[] = [];
	for (const axis of [0, 1, 2] as const) {
		low.push(checkpoints.reduce((least, { place }) => Math.min(least, place[axis]), Number.POSITIVE_INFINITY) - 5);
		high.push(checkpoints.reduce((most, { place }) => Math.max(most, place[axis]), Number.NEGATIVE_INFINITY) + 5);
	}
	return [0, 1, 2, 3, 4, 5, 6, 7].map((corner): Vector3 => {
		const end = (axis: 0 | 1 | 2, isHigh: boolean): number => (isHigh ? high[axis]! - 0.3 * corner : low[axis]! + 0.2 * corner);
		return [end(0, (corner & 1) > 0), end(1, (corner & 2) > 0), end(2, (corner & 4) > 0)];
	});
}

const perSetup = 20;
const mostSetups = 300;

/**
 * Displaces and observes checkpoints. Every other set-up is levelled, the rest are turned any way.
 * @param seed the same seed gives the same survey
 * @throws Error where a fit of the simulated targets is refused: a fault of ours
 */
export function simulateSurvey(checkpoints: readonly Checkpoint[], seed: number): SimulatedSurvey {
	const uniform = seededRandom(seed);
	const draw = normalDraw(uniform);
	const displaced = checkpoints.map((checkpoint, index) => displace(checkpoint, index, uniform));
	const places = targetPlaces(checkpoints);
	const count = Math.min(mostSetups, Math.max(1, Math.ceil(checkpoints.length / perSetup)));
	const setups: SimulatedSetup[] = [];
	const points: CheckInputPoint[] = [];
	for (let number = 0; number < count; number++) {
		const id = `S${number + 1}`;
		const isLevelled = number % 2 === 0;
		const turn = turnOf(isLevelled, uniform);
		const shift: Vector3 = [1000 + 50 * uniform(), 2000 - 90 * uniform(), 100 * uniform()];
		const middle = places[0]!;
		/** survey = turn · (design − middle) + shift. */
		const toSurvey = (design: Vector3): Vector3 => {
			const [x, y, z] = [design[0] - middle[0], design[1] - middle[1], design[2] - middle[2]];
			const row = (k: 0 | 1 | 2): number => turn[k][0] * x + turn[k][1] * y + turn[k][2] * z + shift[k];
			return [row(0), row(1), row(2)];
		};
		const pairs = places.map(
			(place, at): FitPair => ({
				name: `${id}T${at + 1}`,
				survey: [...plus(toSurvey(place), errors(simulatedNoise.targetM, draw))],
				control: [...plus(place, errors(simulatedNoise.controlM, draw))],
				surveySigma: [...simulatedNoise.targetM],
				controlSigma: [...simulatedNoise.controlM],
			}),
		);
		const fit = computeFit({ fit: isLevelled ? 'levelled' : 'free', pairs }, { findings: false });
		if (!fit.ok) throw new Error(fit.refusal.message);
		setups.push({ id, name: id, fit: fit.result, commonMm: simulatedNoise.commonMm, pointSigmaM: null, pairs });
		const commonM = simulatedNoise.commonMm / 1000;
		const common = errors([commonM, commonM, commonM], draw);
		// Neighbours in the list go to one set-up: what its points share cancels in a section.
		const share = checkpoints.length / count;
		for (let index = Math.ceil(number * share); index < Math.ceil((number + 1) * share); index++) {
			points.push({
				name: checkpoints[index]!.id,
				setupId: id,
				surveyPoint: plus(plus(toSurvey(displaced[index]!.builtM), common), errors(simulatedNoise.pointM, draw)),
				sigmaM: simulatedNoise.pointM,
				offsetMm: 0,
			});
		}
	}
	return { displaced, setups, points };
}
