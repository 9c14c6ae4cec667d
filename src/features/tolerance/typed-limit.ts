import { z } from 'zod';
import type { Limit, LimitTerm } from '#shared/tolerance/sheet-schema.ts';

/** A field of a number as it is typed: empty is null, what is no number NaN. What must stand there is asked only of fields in use. */
export const typedNumber = z.union([z.number(), z.nan()]).nullable();

const size = z.enum(['height', 'length', 'thickness']);
/** A number of millimetres, or one of the element's sizes over a divisor. */
const typedTerm = z.object({ of: z.enum(['mm', ...size.options]), value: typedNumber });

/** One side of a rule's limits, as a person sets it: which kind, and the fields of all kinds, so that changing the kind loses nothing. */
export const typedLimit = z.object({
	kind: z.enum(['none', 'term', 'greater', 'lesser', 'between']),
	first: typedTerm,
	second: typedTerm,
	/** Of `greater` and `lesser`; empty: no cap. */
	atMost: typedNumber,
	/** Of `between`. */
	of: size,
	points: z.array(z.object({ sizeMm: typedNumber, limitMm: typedNumber })).max(40),
	/** Counts on the minus side. Of a bare number its sign says so. */
	isMinus: z.boolean(),
});
export type TypedLimit = z.infer<typeof typedLimit>;

/** Says what is wrong in a field; the path counts from the value at hand. */
export type SayFault = (path: readonly (string | number)[], message: string) => void;

/** A field that must hold a number; 0, with the fault said, where it does not. */
export function numberIn(value: number | null, path: readonly (string | number)[], sayFault: SayFault, isPositive = false): number {
	if (value === null || !Number.isFinite(value)) sayFault(path, 'Write a number.');
	else if (isPositive && value <= 0) sayFault(path, 'Write a number over 0.');
	else return value;
	return 0;
}

/** An empty side: what a new rule begins with. */
export function emptyLimit(isLower: boolean): TypedLimit {
	return {
		kind: 'none',
		first: { of: 'mm', value: null },
		second: { of: 'height', value: null },
		atMost: null,
		of: 'thickness',
		points: [
			{ sizeMm: null, limitMm: null },
			{ sizeMm: null, limitMm: null },
		],
		isMinus: isLower,
	};
}

/** A sheet's limit as it stands in the fields. */
export function limitAsTyped(limit: Limit, isLower: boolean): TypedLimit {
	const typed = emptyLimit(isLower);
	if (limit === null) return typed;
	if (typeof limit === 'number') return { ...typed, kind: 'term', first: { of: 'mm', value: limit } };
	if ('minus' in limit) {
		if (typeof limit.minus === 'number') return { ...typed, kind: 'term', first: { of: 'mm', value: 0 - limit.minus } };
		return { ...limitAsTyped(limit.minus, isLower), isMinus: true };
	}
	const plus = { ...typed, isMinus: false };
	if ('between' in limit)
		return { ...plus, kind: 'between', of: limit.of, points: limit.between.map(([sizeMm, limitMm]) => ({ sizeMm, limitMm })) };
	if (!('greaterOf' in limit || 'lesserOf' in limit)) return { ...plus, kind: 'term', first: termAsTyped(limit) };
	const [kind, terms] = 'greaterOf' in limit ? (['greater', limit.greaterOf] as const) : (['lesser', limit.lesserOf] as const);
	return { ...plus, kind, first: termAsTyped(terms[0]), second: termAsTyped(terms[1]), atMost: limit.atMost ?? null };
}

function termAsTyped(term: LimitTerm): TypedLimit['first'] {
	if (typeof term === 'number') return { of: 'mm', value: term };
	if ('heightOver' in term) return { of: 'height', value: term.heightOver };
	if ('thicknessOver' in term) return { of: 'thickness', value: term.thicknessOver };
	return { of: 'length', value: term.lengthOver };
}

/** The limit that the fields say, each fault at its field. */
export function limitOfTyped(typed: TypedLimit, sayFault: SayFault): Limit {
	if (typed.kind === 'none') return null;
	if (typed.kind === 'term' && typed.first.of === 'mm') return numberIn(typed.first.value, ['first', 'value'], sayFault);
	const positive = formulaOf(typed, sayFault);
	return typed.isMinus ? { minus: positive } : positive;
}

type Formula = Exclude<Limit, null | { minus: unknown }>;

function formulaOf(typed: TypedLimit, sayFault: SayFault): Formula {
	const first = () => termOfTyped(typed.first, 'first', sayFault);
	if (typed.kind === 'between') {
		const between = typed.points.map(({ sizeMm, limitMm }, index): [number, number] => [
			numberIn(sizeMm, ['points', index, 'sizeMm'], sayFault),
			numberIn(limitMm, ['points', index, 'limitMm'], sayFault),
		]);
		if (between.length < 2) sayFault(['of'], 'At least two sizes.');
		const twice = between.findIndex(([sizeMm], index) => between.slice(0, index).some(([other]) => other === sizeMm));
		if (twice >= 0) sayFault(['points', twice, 'sizeMm'], 'This size stands twice.');
		return { between, of: typed.of };
	}
	if (typed.kind !== 'greater' && typed.kind !== 'lesser') return first();
	const terms: [LimitTerm, LimitTerm] = [first(), termOfTyped(typed.second, 'second', sayFault)];
	const cap = typed.atMost === null ? {} : { atMost: numberIn(typed.atMost, ['atMost'], sayFault) };
	return typed.kind === 'greater' ? { greaterOf: terms, ...cap } : { lesserOf: terms, ...cap };
}

function termOfTyped({ of, value }: TypedLimit['first'], name: string, sayFault: SayFault): LimitTerm {
	if (of === 'mm') return numberIn(value, [name, 'value'], sayFault);
	const divisor = numberIn(value, [name, 'value'], sayFault, true) || 1;
	if (of === 'height') return { heightOver: divisor };
	return of === 'length' ? { lengthOver: divisor } : { thicknessOver: divisor };
}

/** The same limit on the other side. */
export function turnedLimit(limit: Limit): Limit {
	if (limit === null) return null;
	if (typeof limit === 'number') return 0 - limit;
	return 'minus' in limit ? limit.minus : { minus: limit };
}
