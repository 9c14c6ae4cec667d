import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckDetail, CheckElement } from '#shared/check/contract.ts';
import { type DerivedRow, derivedRow, type JudgedRow } from '#shared/check/derived/derived-row.ts';
import { shareOfLimits } from '#src/ui/wide-rod.tsx';
import { filterOf, type VerdictFilter } from './verdict-filter.ts';

/** The deviations of one element and what is derived from them, the worst first. */
export interface ElementGroup {
	readonly key: string;
	readonly element: CheckElement;
	/** "leans east, 23 at the top"; empty where there is nothing to say. */
	readonly phrase: string;
	readonly rows: readonly JudgedRow[];
}

/** What is shown of a check. Null: all. */
export interface CheckFilter {
	readonly verdicts: readonly VerdictFilter[];
	readonly pourId: string | null;
	readonly storey: string | null;
	/** Part of a mark or title, as a person types it. */
	readonly find: string;
}

/** What is off comes first, then what nobody can tell, then what nobody saw, then what is well. */
const rankOf: Record<Deviation['verdict'], number> = {
	outside: 5,
	'too-close-to-call': 4,
	undecided: 3,
	'not-measured': 2,
	'no-tolerance': 1,
	within: 0,
};

/** How bad a deviation is: larger is worse. Within a verdict by the millimetres beyond the limit, else by the share of the limits. */
function badness({ verdict, beyondMm, deviationMm, limitsMm, characteristic }: JudgedRow): number {
	const share =
		deviationMm === null || limitsMm === null ? 0 : Math.abs(shareOfLimits({ deviationMm, limitsMm, isPlan: characteristic === 'plan' }));
	const within = verdict === 'outside' ? (beyondMm ?? 0) : share;
	return rankOf[verdict] * 1e6 + Math.min(within, 1e5);
}

/** The worst first; equally bad ones in the order of the check. */
function byBadness(a: JudgedRow, b: JudgedRow): number {
	return badness(b) - badness(a);
}

/** A check's derived results as rows, in its order. */
export const derivedRowsOf = ({ derived }: CheckDetail): DerivedRow[] => derived.map(derivedRow);

function byElement<Row extends { readonly elementId: string }>(rows: readonly Row[]): Map<string, Row[]> {
	const of = new Map<string, Row[]>();
	for (const row of rows) {
		const own = of.get(row.elementId);
		if (own === undefined) of.set(row.elementId, [row]);
		else own.push(row);
	}
	return of;
}

/** Every element with its deviations and what is derived from them, the worst element first. Done once a check: filtering keeps the order. */
export function elementGroups(
	check: CheckDetail,
	phraseOf: (rows: readonly Deviation[], derived: readonly DerivedRow[]) => string,
): ElementGroup[] {
	const rowsOf = byElement(check.deviations);
	const derivedOf = byElement(derivedRowsOf(check));
	return check.elements
		.flatMap((element): ElementGroup[] => {
			const rows = rowsOf.get(element.elementId);
			if (rows === undefined) return [];
			const derived = derivedOf.get(element.elementId) ?? [];
			return [{ key: element.elementId, element, phrase: phraseOf(rows, derived), rows: [...rows, ...derived].sort(byBadness) }];
		})
		.sort((a, b) => byBadness(a.rows[0]!, b.rows[0]!) || a.element.title.localeCompare(b.element.title, 'en', { numeric: true }));
}

/** Blanks, dashes and slashes count for nothing: "c3" finds "C/3, ground" and "C3-G". */
function plainMark(text: string): string {
	return text.toLowerCase().replace(/[\s,/\-–_.]+/g, '');
}

/**
 * Deviations whose limits a table's rods are scaled by: those that are off, or else all, without the widest fifth of limits, so that one kind of
 * element with wide limits (a pile) does not shrink all other rods to a line. Its own sit at the end of theirs.
 */
export function scaledBy(deviations: readonly Deviation[]): Deviation[] {
	const off = deviations.filter(({ verdict }) => verdict === 'outside' || verdict === 'too-close-to-call' || verdict === 'undecided');
	const asked = (off.length > 0 ? off : deviations).filter(({ limitsMm }) => limitsMm !== null);
	const widthOf = ({ limitsMm }: Deviation): number => Math.max(...(limitsMm ?? []).map((limit) => Math.abs(limit ?? 0)));
	const widths = asked.map(widthOf).sort((a, b) => a - b);
	const widest = widths[Math.floor((widths.length - 1) * 0.8)] ?? Number.POSITIVE_INFINITY;
	return asked.filter((deviation) => widthOf(deviation) <= widest);
}

/** The elements a filter lets through, whatever their verdicts. */
export function elementPasses(element: CheckElement, { pourId, storey, find }: CheckFilter): boolean {
	if (pourId !== null && !element.pourIds.includes(pourId)) return false;
	if (storey !== null && element.storey !== storey) return false;
	const wanted = plainMark(find);
	return wanted === '' || plainMark(element.mark).includes(wanted) || plainMark(element.title).includes(wanted);
}

/** What the table shows. The chosen one stays, whatever the filter says, so that a link never leads to nothing. */
export function shownGroups(groups: readonly ElementGroup[], filter: CheckFilter, chosenId: string | null): ElementGroup[] {
	return groups.flatMap((group) => {
		const passes = elementPasses(group.element, filter);
		const rows = group.rows.filter((row) => row.checkpointId === chosenId || (passes && filter.verdicts.includes(filterOf(row))));
		return rows.length === 0 ? [] : [{ ...group, rows }];
	});
}
