import type { Limit, LimitTerm, ToleranceRule } from './sheet-schema.ts';

/** Sizes of an element's body, metres; null where its shape does not give them. */
export interface ElementSizesM {
	readonly length: number | null;
	readonly height: number | null;
	readonly thickness: number | null;
}

export type SizeName = keyof ElementSizesM;

/** A limit in millimetres (null: none on that side), or the size it would need and the element has not. */
export type EvaluatedLimit = { readonly limitMm: number | null } | { readonly missingSize: SizeName };

/** Millimetres, free of what unit conversion leaves behind (under a nanometre), so that a 3 m wall is not "over 3000". */
export function sizeInMm(sizesM: ElementSizesM, name: SizeName): number | null {
	const sizeM = sizesM[name];
	return sizeM === null ? null : Math.round(sizeM * 1e9) / 1e6;
}

function evaluateTerm(term: LimitTerm, sizesM: ElementSizesM): EvaluatedLimit {
	if (typeof term === 'number') return { limitMm: term };
	const [name, divisor]: [SizeName, number] =
		'heightOver' in term
			? ['height', term.heightOver]
			: 'thicknessOver' in term
				? ['thickness', term.thicknessOver]
				: ['length', term.lengthOver];
	const sizeMm = sizeInMm(sizesM, name);
	return sizeMm === null ? { missingSize: name } : { limitMm: sizeMm / divisor };
}

/** Straight between the given sizes; beyond the first and the last the value there holds on. */
function interpolate(points: readonly (readonly [number, number])[], sizeMm: number): number {
	const sorted = [...points].sort((a, b) => a[0] - b[0]);
	let [previousSize, previousLimit] = sorted[0]!;
	if (sizeMm <= previousSize) return previousLimit;
	for (const [size, limitMm] of sorted.slice(1)) {
		if (sizeMm <= size) {
			const share = size === previousSize ? 1 : (sizeMm - previousSize) / (size - previousSize);
			return previousLimit + share * (limitMm - previousLimit);
		}
		[previousSize, previousLimit] = [size, limitMm];
	}
	return previousLimit;
}

/**
 * A limit of a rule for an element of these sizes, millimetres.
 * A limit that needs a size the element has not is no limit at all but `missingSize`: never guessed, never taken as wide open.
 */
export function evaluateLimit(limit: Limit, sizesM: ElementSizesM): EvaluatedLimit {
	if (limit === null || typeof limit === 'number') return { limitMm: limit };
	if ('minus' in limit) {
		const turned = evaluateLimit(limit.minus, sizesM);
		return 'limitMm' in turned && turned.limitMm !== null ? { limitMm: 0 - turned.limitMm } : turned;
	}
	if ('between' in limit) {
		const sizeMm = sizeInMm(sizesM, limit.of);
		return sizeMm === null ? { missingSize: limit.of } : { limitMm: interpolate(limit.between, sizeMm) };
	}
	if (!('greaterOf' in limit || 'lesserOf' in limit)) return evaluateTerm(limit, sizesM);
	const isGreater = 'greaterOf' in limit;
	const [first, second] = (isGreater ? limit.greaterOf : limit.lesserOf).map((term) => evaluateTerm(term, sizesM)) as [
		EvaluatedLimit,
		EvaluatedLimit,
	];
	if ('missingSize' in first) return first;
	if ('missingSize' in second) return second;
	const chosen = isGreater ? Math.max(first.limitMm!, second.limitMm!) : Math.min(first.limitMm!, second.limitMm!);
	return { limitMm: limit.atMost === undefined ? chosen : Math.min(chosen, limit.atMost) };
}

export type EvaluatedLimits =
	| { readonly limitsMm: readonly [number | null, number | null] }
	| { readonly missingSize: SizeName }
	/** The lower limit came out above the upper one, or a circle has a negative radius. */
	| { readonly crossed: readonly [number | null, number | null] };

/**
 * Both sides of a rule for an element of these sizes, millimetres. In plan a circle has an upper side only, its radius; a box has both.
 */
export function evaluateLimits(rule: ToleranceRule, sizesM: ElementSizesM, isPlan: boolean): EvaluatedLimits {
	const upper = evaluateLimit(rule.upperMm, sizesM);
	if ('missingSize' in upper) return upper;
	if (isPlan && rule.shape !== 'box') {
		const limitsMm = [null, upper.limitMm] as const;
		return upper.limitMm !== null && upper.limitMm < 0 ? { crossed: limitsMm } : { limitsMm };
	}
	const lower = evaluateLimit(rule.lowerMm, sizesM);
	if ('missingSize' in lower) return lower;
	const limitsMm = [lower.limitMm, upper.limitMm] as const;
	return lower.limitMm !== null && upper.limitMm !== null && lower.limitMm > upper.limitMm ? { crossed: limitsMm } : { limitsMm };
}
