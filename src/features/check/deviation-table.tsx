import { memo, useCallback, useMemo } from 'react';
import type { JudgedRow } from '#shared/check/derived/derived-row.ts';
import { deviationSentence, verdictWords } from '#shared/check/sentence.ts';

import { useColourSet } from '#src/lib/colour-set.ts';
import { plainMm, signedMm, uncertaintyMm } from '#src/lib/format.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Rod } from '#src/ui/rod.tsx';
import { type Column, Table, type TableGroup } from '#src/ui/table.tsx';
import type { ElementGroup } from './element-groups.ts';

interface DeviationTableProps {
	groups: readonly ElementGroup[];
	chosenId: string | null;
	onChoose: (checkpointId: string) => void;
	/** Enter on a row: the view frames it. */
	onOpen: (checkpointId: string) => void;
	/** What half a rod stands for, mm; one for the whole check, so that filters do not change a picture. */
	scaleMm: number;
	/** Two lines a row, for a narrow screen. */
	isNarrow: boolean;
}

/** The words of a verdict have its colour only where something is off; the rest is in ink, or recedes. */
export function verdictClass(deviation: JudgedRow): string {
	if (deviation.verdict === 'outside') {
		return `font-strong ${glyphKindOf(deviation) === 'shy' ? 'text-shy-word' : 'text-proud-word'}`;
	}
	return deviation.verdict === 'too-close-to-call' || deviation.verdict === 'undecided' ? '' : 'text-second';
}

/** The figure of a deviation: signed along a line, a distance in plan. */
export function deviationFigure({ characteristic, deviationMm, expandedUncertaintyMm }: JudgedRow): string {
	return characteristic === 'plan' ? plainMm(deviationMm, expandedUncertaintyMm) : signedMm(deviationMm, expandedUncertaintyMm);
}

/** A deviation's rod, at a table's scale or its own. */
export function DeviationRod({
	deviation,
	scaleMm,
	widthPx,
	heightPx,
}: {
	deviation: JudgedRow;
	scaleMm: number;
	widthPx: number;
	heightPx: number;
}) {
	return (
		<Rod
			deviationMm={deviation.deviationMm}
			limitsMm={deviation.limitsMm}
			expandedUncertaintyMm={deviation.expandedUncertaintyMm}
			scaleMm={scaleMm}
			glyph={glyphKindOf(deviation)}
			sentence={deviationSentence(deviation)}
			isPlan={deviation.characteristic === 'plan'}
			turnRad={planTurnRad(deviation.offsetMm)}
			widthPx={widthPx}
			heightPx={heightPx}
		/>
	);
}

function wideColumns(scaleMm: number, rodPx: number): Column<JudgedRow>[] {
	return [
		{
			key: 'where',
			head: 'Where',
			isRowHead: true,
			cell: (row) => (
				<span className="line-clamp-2 w-0 min-w-full leading-[1.1] whitespace-normal" title={row.label}>
					{row.label}
				</span>
			),
		},
		{
			key: 'rod',
			head: rodPx < 176 ? `Limits, ±${scaleMm} mm` : `Against its limits, ±${scaleMm} mm`,
			widthPx: rodPx + 16,
			cell: (row) => <DeviationRod deviation={row} scaleMm={scaleMm} widthPx={rodPx} heightPx={30} />,
		},
		{
			key: 'mm',
			head: 'mm',
			align: 'end',
			widthPx: 58,
			cell: (row) => <span className="font-strong">{deviationFigure(row)}</span>,
		},
		{
			key: 'u',
			head: (
				<abbr title="Known to: the expanded uncertainty U, mm" className="no-underline">
					±
				</abbr>
			),
			align: 'end',
			widthPx: 38,
			cell: (row) => <span className="text-second">{row.deviationMm === null ? '' : uncertaintyMm(row.expandedUncertaintyMm)}</span>,
		},
		{ key: 'verdict', head: 'Verdict', widthPx: 142, cell: (row) => <span className={verdictClass(row)}>{verdictWords(row)}</span> },
	];
}

function narrowColumns(scaleMm: number): Column<JudgedRow>[] {
	return [
		{
			key: 'where',
			head: `Where, against ±${scaleMm} mm`,
			isRowHead: true,
			cell: (row) => (
				<span className="block">
					<span className="line-clamp-2 w-0 min-w-full text-small leading-[1.15] whitespace-normal">{row.label}</span>
					<span className="-ml-1 block">
						<DeviationRod deviation={row} scaleMm={scaleMm} widthPx={176} heightPx={26} />
					</span>
				</span>
			),
		},
		{
			key: 'verdict',
			head: 'mm',
			align: 'end',
			widthPx: 112,
			cell: (row) => (
				<span className="block leading-tight whitespace-normal">
					<span className="font-strong">{deviationFigure(row)}</span>
					{row.deviationMm !== null && <span className="text-second"> ±{uncertaintyMm(row.expandedUncertaintyMm)}</span>}
					<br />
					<span className={`text-small ${verdictClass(row)}`}>{verdictWords(row)}</span>
				</span>
			),
		},
	];
}

const keyOf = (row: JudgedRow): string => row.checkpointId;

/** The check's table: elements, the worst first, each with what is shown of it. */
export const DeviationTable = memo(function DeviationTable({ groups, chosenId, onChoose, onOpen, scaleMm, isNarrow }: DeviationTableProps) {
	// Large and heavy type needs the room for where a place is.
	const rodPx = useColourSet().set === 'sun' ? 138 : 176;
	const columns = useMemo(() => (isNarrow ? narrowColumns(scaleMm) : wideColumns(scaleMm, rodPx)), [isNarrow, scaleMm, rodPx]);
	const tableGroups = useMemo(
		(): TableGroup<JudgedRow>[] =>
			groups.map((group) => ({
				key: group.key,
				rows: group.rows,
				head: (
					<span className={isNarrow ? 'block leading-tight whitespace-normal' : ''}>
						{group.element.title} <span className="font-normal text-second">{group.phrase}</span>
					</span>
				),
			})),
		[groups, isNarrow],
	);
	const open = useCallback((key: string) => onOpen(key), [onOpen]);
	return (
		<Table
			caption="Deviations by element, the worst first"
			columns={columns}
			groups={tableGroups}
			keyOf={keyOf}
			chosenKey={chosenId}
			onChoose={onChoose}
			onOpen={open}
			scrollClass="h-full"
			{...(isNarrow ? { rowHeightPx: 68 } : {})}
		/>
	);
});
