import { agree, type DistanceAgreement, distanceAgreement, distancesAgree, mostAround } from './distance-agreement.ts';
import { triadPose } from './triad.ts';

/**
 * @param size how many pairs lie within the tolerance of one pose, 0 where no three do
 * @param triple the three whose pose it is, null where there are none
 * @param fitted how many poses were worked out on the way
 */
export interface LargestAgreement {
	size: number;
	triple: readonly [number, number, number] | null;
	fitted: number;
}

/** Counts what agrees with a pose, and remembers who did not: asked first the next time, they end a hopeless count early. */
class Counter {
	best = 0;
	triple: [number, number, number] | null = null;
	fitted = 0;
	private readonly survey: Float64Array;
	private readonly control: Float64Array;
	private readonly count: number;
	private readonly square: number;
	private readonly order: Int32Array;
	private readonly pose = new Float64Array(12);

	constructor(survey: Float64Array, control: Float64Array, count: number, toleranceM: number) {
		this.survey = survey;
		this.control = control;
		this.count = count;
		this.square = toleranceM * toleranceM;
		this.order = Int32Array.from({ length: count }, (_, i) => i);
	}

	try(i: number, j: number, k: number): void {
		const { survey, control, count, square, order, pose } = this;
		if (!triadPose(survey, control, i, j, k, pose)) return;
		this.fitted++;
		const m0 = pose[0]!;
		const m1 = pose[1]!;
		const m2 = pose[2]!;
		const m3 = pose[3]!;
		const m4 = pose[4]!;
		const m5 = pose[5]!;
		const m6 = pose[6]!;
		const m7 = pose[7]!;
		const m8 = pose[8]!;
		const shiftE = pose[9]!;
		const shiftN = pose[10]!;
		const shiftH = pose[11]!;
		// More misses than this cannot be better than the best.
		const spare = count - this.best - 1;
		let misses = 0;
		for (let place = 0; place < count; place++) {
			const member = order[place]!;
			const at = 3 * member;
			const x = survey[at]!;
			const y = survey[at + 1]!;
			const z = survey[at + 2]!;
			const e = m0 * x + m1 * y + m2 * z + shiftE - control[at]!;
			const n = m3 * x + m4 * y + m5 * z + shiftN - control[at + 1]!;
			const h = m6 * x + m7 * y + m8 * z + shiftH - control[at + 2]!;
			if (e * e + n * n + h * h <= square) continue;
			order[place] = order[misses]!;
			order[misses] = member;
			if (++misses > spare) return;
		}
		this.best = count - misses;
		this.triple = [i, j, k];
	}

	result(): LargestAgreement {
		return { size: this.best, triple: this.triple, fitted: this.fitted };
	}
}

/**
 * The most pairs that lie within a tolerance of the pose of any three of them: consensus (Fischler & Bolles 1981) over every three, exact, though
 * few are fitted. Three are passed over where their distances contradict each other, or where no more pairs agree with all three by distance than
 * the best has already.
 * @param survey 3 numbers a pair, metres
 * @param control likewise
 * @param toleranceM how far a pair may lie from where the pose puts it
 * @param agreement of distanceAgreement for the same pairs and tolerance, where the caller has it
 */
export function largestAgreement(
	survey: Float64Array,
	control: Float64Array,
	count: number,
	toleranceM: number,
	agreement: DistanceAgreement = distanceAgreement(survey, control, count, toleranceM),
): LargestAgreement {
	const counter = new Counter(survey, control, count, toleranceM);
	for (let i = 0; i < count; i++) {
		for (let j = i + 1; j < count; j++) {
			if (!agree(agreement, i, j)) continue;
			for (let k = j + 1; k < count; k++) {
				if (agree(agreement, i, k) && agree(agreement, j, k) && mostAround(agreement, i, j, k) > counter.best) counter.try(i, j, k);
			}
		}
	}
	return counter.result();
}

/**
 * The same over some threes only, for more pairs than can be tried in full.
 * @param triples three indices each, one after another
 */
export function largestAgreementOf(
	survey: Float64Array,
	control: Float64Array,
	count: number,
	toleranceM: number,
	triples: Int32Array,
): LargestAgreement {
	const counter = new Counter(survey, control, count, toleranceM);
	for (let at = 0; at + 2 < triples.length; at += 3) {
		const i = triples[at]!;
		const j = triples[at + 1]!;
		const k = triples[at + 2]!;
		if (
			distancesAgree(survey, control, i, j, toleranceM) &&
			distancesAgree(survey, control, j, k, toleranceM) &&
			distancesAgree(survey, control, i, k, toleranceM)
		)
			counter.try(i, j, k);
	}
	return counter.result();
}
