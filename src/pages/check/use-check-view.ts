import { useCallback, useDeferredValue, useMemo } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import type { JudgedRow } from '#shared/check/derived/derived-row.ts';
import { elementSummary } from '#shared/check/element-summary.ts';
import { type DeviationMark, drawingOrder, marksOf } from '#src/features/check/deviation-mark.ts';
import { type CheckFilter, derivedRowsOf, elementGroups, elementPasses, shownGroups } from '#src/features/check/element-groups.ts';
import { filterOf, firstShown, type VerdictFilter, verdictFilters } from '#src/features/check/verdict-filter.ts';
import { useAddressSet, useAddressState } from '#src/lib/address-state.ts';

/** What the page shows of its check, all of it from the address, so that a link shows a colleague the same. */
export function useCheckView(check: CheckDetail) {
	const [chosenId, setChosenId] = useAddressState('at');
	const [pourId, setPourId] = useAddressState('pour');
	const [storey, setStorey] = useAddressState('storey');
	const [findText, setFind] = useAddressState('find');
	const derived = useMemo(() => derivedRowsOf(check), [check]);
	const judged = useMemo((): readonly JudgedRow[] => [...check.deviations, ...derived], [check.deviations, derived]);
	const fallback = useMemo(() => firstShown(judged), [judged]);
	const [verdicts, setVerdicts] = useAddressSet<VerdictFilter>('show', verdictFilters, fallback);
	const find = findText ?? '';
	// The field answers at once; the table of thousands follows when there is time.
	const lateFind = useDeferredValue(find);
	const verdictKey = verdicts.join();

	const groups = useMemo(() => elementGroups(check, (rows, ofElement) => elementSummary(rows, ofElement) ?? ''), [check]);
	const filter = useMemo(
		(): CheckFilter => ({
			verdicts: verdictKey.split(',').filter((word): word is VerdictFilter => verdictFilters.some((known) => known === word)),
			pourId,
			storey,
			find: lateFind,
		}),
		[verdictKey, pourId, storey, lateFind],
	);
	// Whether the chosen row is among the shown decides nothing for the others: the table is laid out anew only where it is not.
	const groupsOfFilter = useMemo(() => shownGroups(groups, filter, null), [groups, filter]);
	const isChosenShown = useMemo(
		() => chosenId === null || groupsOfFilter.some((group) => group.rows.some((row) => row.checkpointId === chosenId)),
		[groupsOfFilter, chosenId],
	);
	const shown = useMemo(
		() => (isChosenShown ? groupsOfFilter : shownGroups(groups, filter, chosenId)),
		[isChosenShown, groupsOfFilter, groups, filter, chosenId],
	);
	const elementById = useMemo(() => new Map(check.elements.map((element) => [element.elementId, element])), [check.elements]);
	/** Those that pour, storey and find let through: what the chips count and the wide rod draws. */
	const passing = useMemo(
		() =>
			judged.filter((row) => {
				const element = elementById.get(row.elementId);
				return element === undefined || elementPasses(element, filter);
			}),
		[judged, elementById, filter],
	);
	const marks = useMemo(() => marksOf(check.deviations), [check.deviations]);
	const chosen = useMemo(() => check.deviations.find((row) => row.checkpointId === chosenId) ?? null, [check.deviations, chosenId]);
	const chosenDerived = useMemo(() => derived.find((row) => row.checkpointId === chosenId) ?? null, [derived, chosenId]);
	const chosenElementId = chosen?.elementId ?? chosenDerived?.elementId;
	const passingIds = useMemo(() => new Set(passing.map((row) => row.checkpointId)), [passing]);
	const filterById = useMemo(() => new Map(check.deviations.map((row) => [row.checkpointId, filterOf(row)])), [check.deviations]);

	/** What is drawn: the shown verdicts, and what is within as small rings, because "checked and well" is worth seeing; with "only these" not. */
	const drawnOfFilter = useMemo(() => {
		const drawn = (alsoWithin: boolean): DeviationMark[] =>
			marks.filter((mark) => {
				const verdict = filterById.get(mark.checkpointId);
				if (verdict === undefined || !passingIds.has(mark.checkpointId)) return false;
				return filter.verdicts.includes(verdict) || (alsoWithin && verdict === 'within');
			});
		return { all: drawn(true), onlyThese: drawn(false) };
	}, [marks, filterById, passingIds, filter]);
	// The chosen one is always drawn. Where it is among them anyway, a new choice builds nothing anew.
	const drawnMarks = useMemo(
		() => ({ all: withMark(drawnOfFilter.all, marks, chosenId), onlyThese: withMark(drawnOfFilter.onlyThese, marks, chosenId) }),
		[drawnOfFilter, marks, chosenId],
	);
	const clear = useCallback(() => setChosenId(null), [setChosenId]);
	return {
		chosenId,
		chosen,
		/** A derived result that is chosen: it has no mark of its own, its element is shown. */
		chosenDerived,
		chosenElement: chosenElementId === undefined ? null : (elementById.get(chosenElementId) ?? null),
		choose: setChosenId,
		clear,
		verdicts,
		setVerdicts,
		pourId,
		setPourId,
		storey,
		setStorey,
		find,
		setFind,
		groups,
		shown,
		passing,
		elementById,
		drawnMarks,
	};
}

/** The same list where it holds the mark already. */
function withMark(drawn: readonly DeviationMark[], marks: readonly DeviationMark[], checkpointId: string | null): readonly DeviationMark[] {
	if (checkpointId === null || drawn.some((mark) => mark.checkpointId === checkpointId)) return drawn;
	const chosen = marks.find((mark) => mark.checkpointId === checkpointId);
	return chosen === undefined ? drawn : [...drawn, chosen];
}

export type CheckView = ReturnType<typeof useCheckView>;

/** The worst mark of an element: what a press on the element itself chooses. */
export function worstMarkOf(marks: readonly DeviationMark[], elementId: string): DeviationMark | null {
	let worst: DeviationMark | null = null;
	for (const mark of marks) {
		if (mark.elementId === elementId && (worst === null || drawingOrder.indexOf(mark.kind) > drawingOrder.indexOf(worst.kind)))
			worst = mark;
	}
	return worst;
}
