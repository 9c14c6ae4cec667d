import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_ALL, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { fitUnknowns } from './least-pairs.ts';
import { sigmaGroupsOf } from './sigma-groups.ts';

/** An axis with less than this share of its variance left as redundancy counts as none. */
export const LEAST_REDUNDANCY = 1e-9;

/**
 * Redundancy and normalised residual of every pair along the axes of the control frame, as flat arrays: searches test fits by the thousand.
 * The rest of a pair's reliability is in pair-reliability.ts.
 */
export interface PairFigures {
	/** 3 a pair: diagonal of I − A·Q·Aᵀ·Σ⁻¹; 0 on an axis that is not known. */
	readonly redundancy: Float64Array;
	/** 3 a pair: |r|/σ_v, not a number where the axis is not known or has no redundancy; with no σ not yet over σ̂₀. */
	readonly standardised: Float64Array;
	/** 6 a pair: A·Q·Aᵀ as xx, xy, xz, yy, yz, zz, m². */
	readonly fitted: Float64Array;
}

export function newPairFigures(count: number): PairFigures {
	return { redundancy: new Float64Array(3 * count), standardised: new Float64Array(3 * count), fitted: new Float64Array(6 * count) };
}

/** Coordinate a of q̂ = (E, N, H) enters row k of A (design-rows.ts) in this column, with this sign: the turns E, N, H are 3, 4, 5, the scale 6. */
const columnOf = Uint8Array.of(6, 5, 4, 5, 6, 3, 4, 3, 6);
const signOf = Float64Array.of(1, -1, 1, 1, 1, -1, -1, 1, 1);
/** xx, xy, xz, yy, yz, zz. */
const rowOfSix = Uint8Array.of(0, 0, 0, 1, 1, 2);
const columnOfSix = Uint8Array.of(0, 1, 2, 1, 2, 2);

const cofactor = new Float64Array(49);
const terms = new Float64Array(60);

/**
 * A·Q·Aᵀ of a place is a quadratic form of its coordinates q̂: six entries, each with the factors of 1, e, n, h, ee, en, eh, nn, nh, hh.
 * Found once for an adjustment; a pair then takes 54 products where A·Q·Aᵀ itself takes twice as many.
 */
function fillTerms(kind: FitObservations['kind'], { cofactor: own }: Adjustment): void {
	const unknowns = fitUnknowns(kind);
	const size = unknowns.length;
	cofactor.fill(0);
	for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) cofactor[7 * unknowns[i]! + unknowns[j]!] = own[i * size + j]!;
	for (let entry = 0; entry < 6; entry++) {
		const k = rowOfSix[entry]!;
		const l = columnOfSix[entry]!;
		let at = 10 * entry;
		terms[at++] = cofactor[7 * k + l]!;
		for (let a = 0; a < 3; a++) {
			const ofK = 3 * k + a;
			const ofL = 3 * l + a;
			terms[at++] = signOf[ofK]! * cofactor[7 * columnOf[ofK]! + l]! + signOf[ofL]! * cofactor[7 * k + columnOf[ofL]!]!;
		}
		for (let a = 0; a < 3; a++) {
			for (let b = a; b < 3; b++) {
				const ka = 3 * k + a;
				const lb = 3 * l + b;
				let term = signOf[ka]! * signOf[lb]! * cofactor[7 * columnOf[ka]! + columnOf[lb]!]!;
				if (a !== b) {
					const kb = 3 * k + b;
					const la = 3 * l + a;
					term += signOf[kb]! * signOf[la]! * cofactor[7 * columnOf[kb]! + columnOf[la]!]!;
				}
				terms[at++] = term;
			}
		}
	}
}

/**
 * Figures of all pairs (Baarda 1968; Mikhail & Gracie 1981), A at the adjusted coordinates.
 * @param figures of newPairFigures for at least as many pairs; filled
 */
export function fillPairFigures(observations: FitObservations, adjustment: Adjustment, figures: PairFigures): void {
	fillTerms(observations.kind, adjustment);
	const { known } = observations;
	const { order, ends } = sigmaGroupsOf(observations);
	const { residual, adjusted, inverse, covariance } = adjustment.equations;
	const { redundancy, standardised, fitted } = figures;
	let place = 0;
	for (let group = 0; group < ends.length; group++) {
		const end = ends[group]!;
		const own = 6 * group;
		const w0 = inverse[own]!;
		const w1 = inverse[own + 1]!;
		const w2 = inverse[own + 2]!;
		const w3 = inverse[own + 3]!;
		const w4 = inverse[own + 4]!;
		const w5 = inverse[own + 5]!;
		const varianceE = covariance[own]!;
		const varianceN = covariance[own + 3]!;
		const varianceH = covariance[own + 5]!;
		for (; place < end; place++) {
			const i = order[place]!;
			const at = 3 * i;
			const six = 6 * i;
			const e = adjusted[at]!;
			const n = adjusted[at + 1]!;
			const h = adjusted[at + 2]!;
			const f0 =
				terms[0]! +
				e * (terms[1]! + e * terms[4]! + n * terms[5]! + h * terms[6]!) +
				n * (terms[2]! + n * terms[7]! + h * terms[8]!) +
				h * (terms[3]! + h * terms[9]!);
			const f1 =
				terms[10]! +
				e * (terms[11]! + e * terms[14]! + n * terms[15]! + h * terms[16]!) +
				n * (terms[12]! + n * terms[17]! + h * terms[18]!) +
				h * (terms[13]! + h * terms[19]!);
			const f2 =
				terms[20]! +
				e * (terms[21]! + e * terms[24]! + n * terms[25]! + h * terms[26]!) +
				n * (terms[22]! + n * terms[27]! + h * terms[28]!) +
				h * (terms[23]! + h * terms[29]!);
			const f3 =
				terms[30]! +
				e * (terms[31]! + e * terms[34]! + n * terms[35]! + h * terms[36]!) +
				n * (terms[32]! + n * terms[37]! + h * terms[38]!) +
				h * (terms[33]! + h * terms[39]!);
			const f4 =
				terms[40]! +
				e * (terms[41]! + e * terms[44]! + n * terms[45]! + h * terms[46]!) +
				n * (terms[42]! + n * terms[47]! + h * terms[48]!) +
				h * (terms[43]! + h * terms[49]!);
			const f5 =
				terms[50]! +
				e * (terms[51]! + e * terms[54]! + n * terms[55]! + h * terms[56]!) +
				n * (terms[52]! + n * terms[57]! + h * terms[58]!) +
				h * (terms[53]! + h * terms[59]!);
			fitted[six] = f0;
			fitted[six + 1] = f1;
			fitted[six + 2] = f2;
			fitted[six + 3] = f3;
			fitted[six + 4] = f4;
			fitted[six + 5] = f5;
			redundancy[at] = 1 - (f0 * w0 + f1 * w1 + f2 * w2);
			redundancy[at + 1] = 1 - (f1 * w1 + f3 * w3 + f4 * w4);
			redundancy[at + 2] = 1 - (f2 * w2 + f4 * w4 + f5 * w5);
			standardised[at] = standardisedOf(residual[at]!, varianceE, f0);
			standardised[at + 1] = standardisedOf(residual[at + 1]!, varianceN, f3);
			standardised[at + 2] = standardisedOf(residual[at + 2]!, varianceH, f5);
			if (known[i] !== KNOWN_ALL) forgetUnknown(known[i]!, at, redundancy, standardised);
		}
	}
}

function standardisedOf(residual: number, variance: number, fitted: number): number {
	const left = variance - fitted;
	return left > LEAST_REDUNDANCY * variance ? Math.abs(residual) / Math.sqrt(left) : Number.NaN;
}

function forgetUnknown(known: number, at: number, redundancy: Float64Array, standardised: Float64Array): void {
	for (let k = 0; k < 3; k++) {
		if ((known & (k < 2 ? KNOWN_PLAN : KNOWN_HEIGHT)) !== 0) continue;
		redundancy[at + k] = 0;
		standardised[at + k] = Number.NaN;
	}
}
