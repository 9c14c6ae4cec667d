import { useMemo, useState } from 'react';
import { Rod } from '#src/ui/rod.tsx';
import { type Column, Table } from '#src/ui/table.tsx';
import type { Sorting } from '#src/ui/table-rows.ts';
import type { ExpectedCheckpoint } from './survey-plan.ts';

/** Every checkpoint with its tolerance and how well it would be known: those that could be decided least come first. */
export function PlannedTable({ checkpoints }: { checkpoints: readonly ExpectedCheckpoint[] }) {
	const [sorting, setSorting] = useState<Sorting | null>(null);
	const rows = useMemo(
		() => [...checkpoints].sort((a, b) => (a.is.capability ?? 1e9) - (b.is.capability ?? 1e9) || b.is.expandedM - a.is.expandedM),
		[checkpoints],
	);
	const scaleMm = useMemo(() => usualScaleMm(rows), [rows]);
	const columns = useMemo((): Column<ExpectedCheckpoint>[] => columnsAt(scaleMm), [scaleMm]);
	return (
		<div className="sheet overflow-hidden">
			<Table
				caption="Checkpoints, how well each would be known, and its tolerance"
				columns={columns}
				rows={rows}
				keyOf={keyOf}
				sorting={sorting}
				onSort={setSorting}
				scrollClass="max-h-[60dvh]"
			/>
		</div>
	);
}

const keyOf = ({ key }: ExpectedCheckpoint) => key;

function columnsAt(scaleMm: number): Column<ExpectedCheckpoint>[] {
	return [
		{ key: 'name', head: 'Checkpoint', cell: ({ of }) => of.name, isRowHead: true, orderBy: ({ of }) => of.name },
		{ key: 'station', head: 'From', cell: ({ stationName }) => stationName, onlyFrom: 'tablet', orderBy: ({ stationName }) => stationName },
		{
			key: 'range',
			head: 'Range, m',
			cell: ({ rangeM }) => rangeM.toFixed(0),
			align: 'end',
			onlyFrom: 'cabin',
			orderBy: ({ rangeM }) => rangeM,
		},
		{
			key: 'rod',
			head: '± within its tolerance',
			cell: (row) => <PlannedRod row={row} scaleMm={scaleMm} />,
			onlyFrom: 'tablet',
			widthPx: 200,
		},
		{
			key: 'expanded',
			head: '±, mm',
			cell: ({ is }) => (1000 * is.expandedM).toFixed(1),
			align: 'end',
			orderBy: ({ is }) => is.expandedM,
		},
		{
			key: 'capability',
			head: 'Cm',
			cell: ({ is }) => (is.capability === null ? '–' : is.capability.toFixed(1)),
			align: 'end',
			orderBy: ({ is }) => is.capability,
		},
	];
}

/** A value of nil with the whisker that it would have: where that passes the notches nothing could be called within. */
function PlannedRod({ row, scaleMm }: { row: ExpectedCheckpoint; scaleMm: number }) {
	const { of, is } = row;
	const half = halfMm(row);
	const expandedMm = 1000 * is.expandedM;
	const isPlan = of.direction === null;
	const limits = half === null ? null : ([isPlan ? null : -half, half] as const);
	const sentence = `${of.name}: known to ±${expandedMm.toFixed(1)} mm, ${half === null ? 'no tolerance' : `tolerance ±${half.toFixed(1)} mm`}`;
	return (
		<Rod
			deviationMm={0}
			limitsMm={limits}
			expandedUncertaintyMm={expandedMm}
			scaleMm={scaleMm}
			glyph={half === null ? 'none' : expandedMm <= half ? 'within' : 'close'}
			sentence={sentence}
			isPlan={isPlan}
		/>
	);
}

/** A quarter more than the tolerance that nine in ten keep under: one wide kind would make all others a line. */
function usualScaleMm(rows: readonly ExpectedCheckpoint[]): number {
	const halves = rows.flatMap((row) => halfMm(row) ?? []).sort((a, b) => a - b);
	return 1.25 * (halves[Math.floor(0.9 * halves.length)] ?? 10);
}

function halfMm({ of }: ExpectedCheckpoint): number | null {
	return of.toleranceWidthM === null ? null : 500 * of.toleranceWidthM;
}
