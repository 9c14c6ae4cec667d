import type { Adjustment } from './adjust.ts';
import { type FitObservations, KNOWN_ALL, KNOWN_HEIGHT, KNOWN_PLAN } from './fit-observations.ts';
import { fitUnknowns } from './least-pairs.ts';

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

function fittedEntry(at: number, e: number, n: number, h: number): number {
	return (
		terms[at]! +
		e * (terms[at + 1]! + e * terms[at + 4]! + n * terms[at + 5]! + h * terms[at + 6]!) +
		n * (terms[at + 2]! + n * terms[at + 7]! + h * terms[at + 8]!) +
		h * (terms[at + 3]! + h * terms[at + 9]!)
	);
}

/**
 * Figures of all pairs (Baarda 1968; Mikhail & Gracie 1981), A at the adjusted coordinates.
 * @param figures of newPairFigures for at least as many pairs; filled
 */
export function fillPairFigures(observations: FitObservations, adjustment: Adjustment, figures: PairFigures): void {
	fillTerms(observations.kind, adjustment);
	const { count, known } = observations;
	const { residual, adjusted, inverse, covariance } = adjustment.equations;
	const { redundancy, standardised, fitted } = figures;
	for (let i = 0; i < count; i++) {
		const at = 3 * i;
		const six = 6 * i;
		const e = adjusted[at]!;
		const n = adjusted[at + 1]!;
		const h = adjusted[at + 2]!;
		const f0 = fittedEntry(0, e, n, h);
		const f1 = fittedEntry(10, e, n, h);
		const f2 = fittedEntry(20, e, n, h);
		const f3 = fittedEntry(30, e, n, h);
		const f4 = fittedEntry(40, e, n, h);
		const f5 = fittedEntry(50, e, n, h);
		fitted[six] = f0;
		fitted[six + 1] = f1;
		fitted[six + 2] = f2;
		fitted[six + 3] = f3;
		fitted[six + 4] = f4;
		fitted[six + 5] = f5;
		const w1 = inverse[six + 1]!;
		const w2 = inverse[six + 2]!;
		const w4 = inverse[six + 4]!;
		redundancy[at] = 1 - (f0 * inverse[six]! + f1 * w1 + f2 * w2);
		redundancy[at + 1] = 1 - (f1 * w1 + f3 * inverse[six + 3]! + f4 * w4);
		redundancy[at + 2] = 1 - (f2 * w2 + f4 * w4 + f5 * inverse[six + 5]!);
		standardised[at] = standardisedOf(residual[at]!, covariance[six]!, f0);
		standardised[at + 1] = standardisedOf(residual[at + 1]!, covariance[six + 3]!, f3);
		standardised[at + 2] = standardisedOf(residual[at + 2]!, covariance[six + 5]!, f5);
		if (known[i] !== KNOWN_ALL) forgetUnknown(known[i]!, at, redundancy, standardised);
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
