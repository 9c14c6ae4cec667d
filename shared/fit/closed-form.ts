import { yawRotation } from '#shared/geometry/rotation.ts';
import { bestTurn } from './best-turn.ts';
import { type FitObservations, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { type FitPose, newPose } from './fit-pose.ts';
import { isLevelled, isScaled } from './least-pairs.ts';

/**
 * The fit in closed form. With weights it is the global minimum of Σ w·‖control − s·R·survey − t‖²; with σ it is where the adjustment starts.
 * Sources: Arun, Huang & Blostein 1987 (singular values), Horn 1987, Umeyama 1991 (determinant, scale); levelled: the same in plan, and a height shift.
 */

/** Share of the largest possible gain under which the best rotation counts as not unique. */
const UNIQUE = 1e-11;

/**
 * @param leastExtentM free fits: neither side's second extent (spread.ts) is under this, metres; 0 where nothing is known of it
 * @param unique false where another rotation fits exactly as well (a mirrored square), or none at a positive scale
 */
export interface ClosedForm {
	pose: FitPose;
	leastExtentM: number;
	unique: boolean;
}

/**
 * @param observations at least the least pairs, with spread
 * @param planWeight one positive number a pair, used for E and N
 * @param heightWeight the same for H; free fits use planWeight for all three
 * @param pose where a free fit writes its pose, for searches that fit by the thousand. By default a new one
 */
export function closedForm(
	observations: FitObservations,
	planWeight: Float64Array,
	heightWeight: Float64Array,
	pose: FitPose = newPose(),
): ClosedForm {
	if (observations.kind === 'height') return heightForm(observations, heightWeight);
	return isLevelled(observations.kind) ? levelledForm(observations, planWeight, heightWeight) : freeForm(observations, planWeight, pose);
}

function heightForm({ count, survey, control }: FitObservations, weight: Float64Array): ClosedForm {
	let total = 0;
	let sum = 0;
	for (let i = 0; i < count; i++) {
		total += weight[i]!;
		sum += weight[i]! * (control[3 * i + 2]! - survey[3 * i + 2]!);
	}
	return {
		pose: { rotation: yawRotation(0), shift: Float64Array.of(0, 0, sum / total), planScale: 1, heightScale: 1 },
		leastExtentM: 0,
		unique: true,
	};
}

function levelledForm(observations: FitObservations, planWeight: Float64Array, heightWeight: Float64Array): ClosedForm {
	const { count, survey, control, known } = observations;
	const total = [0, 0, 0];
	const meanSurvey = [0, 0, 0];
	const meanControl = [0, 0, 0];
	for (let i = 0; i < count; i++) {
		for (let k = 0; k < 3; k++) {
			if ((known[i]! & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) === 0) continue;
			const weight = k < 2 ? planWeight[i]! : heightWeight[i]!;
			total[k]! += weight;
			meanSurvey[k]! += weight * survey[3 * i + k]!;
			meanControl[k]! += weight * control[3 * i + k]!;
		}
	}
	for (let k = 0; k < 3; k++) {
		meanSurvey[k]! /= total[k]!;
		meanControl[k]! /= total[k]!;
	}
	let along = 0;
	let across = 0;
	let upward = 0;
	let surveySquare = 0;
	let surveyPlanSquare = 0;
	let controlPlanSquare = 0;
	for (let i = 0; i < count; i++) {
		if ((known[i]! & KNOWN_PLAN) !== 0) {
			const weight = planWeight[i]!;
			const x = survey[3 * i]! - meanSurvey[0]!;
			const y = survey[3 * i + 1]! - meanSurvey[1]!;
			const e = control[3 * i]! - meanControl[0]!;
			const n = control[3 * i + 1]! - meanControl[1]!;
			along += weight * (x * e + y * n);
			across += weight * (x * n - y * e);
			surveyPlanSquare += weight * (x * x + y * y);
			controlPlanSquare += weight * (e * e + n * n);
		}
		if ((known[i]! & KNOWN_HEIGHT) !== 0) {
			const z = survey[3 * i + 2]! - meanSurvey[2]!;
			upward += heightWeight[i]! * z * (control[3 * i + 2]! - meanControl[2]!);
			surveySquare += heightWeight[i]! * z * z;
		}
	}
	surveySquare += surveyPlanSquare;
	const gain = Math.hypot(along, across);
	let unique = gain > UNIQUE * Math.sqrt(surveyPlanSquare * controlPlanSquare);
	const rotation = yawRotation(Math.atan2(across, along));
	let planScale = observations.fixedScale;
	if (isScaled(observations.kind)) {
		planScale = (gain + upward) / surveySquare;
		if (!(planScale > 0)) {
			unique = false;
			planScale = gain > 0 ? gain / surveyPlanSquare : 1;
		}
	}
	const heightScale = observations.scalesHeights ? planScale : 1;
	return { pose: poseThrough(rotation, planScale, heightScale, meanSurvey, meanControl), leastExtentM: 0, unique };
}

// Scratch: searches fit by the thousand.
const cross = new Float64Array(9);
const singular = new Float64Array(3);

function freeForm(observations: FitObservations, weights: Float64Array, pose: FitPose): ClosedForm {
	const { count, survey, control } = observations;
	let total = 0;
	let heaviest = 0;
	let sx = 0;
	let sy = 0;
	let sz = 0;
	let cx = 0;
	let cy = 0;
	let cz = 0;
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const weight = weights[i]!;
		total += weight;
		if (weight > heaviest) heaviest = weight;
		sx += weight * survey[at]!;
		sy += weight * survey[at + 1]!;
		sz += weight * survey[at + 2]!;
		cx += weight * control[at]!;
		cy += weight * control[at + 1]!;
		cz += weight * control[at + 2]!;
	}
	sx /= total;
	sy /= total;
	sz /= total;
	cx /= total;
	cy /= total;
	cz /= total;
	let xe = 0;
	let xn = 0;
	let xh = 0;
	let ye = 0;
	let yn = 0;
	let yh = 0;
	let ze = 0;
	let zn = 0;
	let zh = 0;
	let surveySquare = 0;
	let controlSquare = 0;
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const weight = weights[i]!;
		const x = survey[at]! - sx;
		const y = survey[at + 1]! - sy;
		const z = survey[at + 2]! - sz;
		const ownE = control[at]! - cx;
		const ownN = control[at + 1]! - cy;
		const ownH = control[at + 2]! - cz;
		const e = weight * ownE;
		const n = weight * ownN;
		const h = weight * ownH;
		surveySquare += weight * (x * x + y * y + z * z);
		controlSquare += e * ownE + n * ownN + h * ownH;
		xe += x * e;
		xn += x * n;
		xh += x * h;
		ye += y * e;
		yn += y * n;
		yh += y * h;
		ze += z * e;
		zn += z * n;
		zh += z * h;
	}
	cross[0] = xe;
	cross[1] = xn;
	cross[2] = xh;
	cross[3] = ye;
	cross[4] = yn;
	cross[5] = yh;
	cross[6] = ze;
	cross[7] = zn;
	cross[8] = zh;
	const { rotation, shift } = pose;
	bestTurn(cross, rotation, singular);
	const first = singular[0]!;
	const second = singular[1]!;
	const third = singular[2]!;
	const unique = second + third > 1e-14 * first && second + third > UNIQUE * second;
	let scale = observations.fixedScale;
	if (isScaled(observations.kind)) scale = (first + second + third) / surveySquare;
	// d₂(XᵀWY) ≤ d₂(√W·X)·d₁(√W·Y), and the scatter about the weighted mean is not over the heaviest weight times the scatter about the plain one.
	const leastExtentM = count > 2 ? second / Math.sqrt(heaviest * count * Math.max(surveySquare, controlSquare)) : 0;
	for (let row = 0; row < 3; row++) {
		const turned = rotation[3 * row]! * sx + rotation[3 * row + 1]! * sy + rotation[3 * row + 2]! * sz;
		shift[row] = (row === 0 ? cx : row === 1 ? cy : cz) - scale * turned;
	}
	pose.planScale = scale;
	pose.heightScale = scale;
	return { pose, leastExtentM, unique };
}

/** The pose that takes one point to another. */
function poseThrough(rotation: Float64Array, planScale: number, heightScale: number, from: number[], to: number[]): FitPose {
	const shift = new Float64Array(3);
	for (let row = 0; row < 3; row++) {
		const turned = rotation[3 * row]! * from[0]! + rotation[3 * row + 1]! * from[1]! + rotation[3 * row + 2]! * from[2]!;
		shift[row] = to[row]! - (row < 2 ? planScale : heightScale) * turned;
	}
	return { rotation, shift, planScale, heightScale };
}
