import { useMemo } from 'react';
import type { ControlPoint, ControlSetSummary } from '#shared/control/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { metres } from '#src/lib/format.ts';
import { type Column, Table } from '#src/ui/table.tsx';

interface ControlPointTableProps {
	points: readonly ControlPoint[];
	frame: ControlSetSummary['frame'];
}

/** Control points in the design's frame, and as given where that was the map's. */
export function ControlPointTable({ points, frame }: ControlPointTableProps) {
	const [chosen, choose] = useAddressState('at');
	const columns = useMemo(() => columnsFor(frame), [frame]);
	return (
		<Table
			caption="Control points"
			columns={columns}
			rows={points}
			keyOf={(point) => point.controlPointId}
			chosenKey={chosen}
			onChoose={choose}
			scrollClass="max-h-[60dvh]"
		/>
	);
}

function columnsFor(frame: ControlSetSummary['frame']): Column<ControlPoint>[] {
	const coordinate = (
		key: string,
		head: string,
		coordinateOf: (point: ControlPoint) => number | null,
		onlyFrom?: 'cabin',
	): Column<ControlPoint> => ({
		key,
		head,
		align: 'end',
		cell: (point) => <span className="font-mono">{metres(coordinateOf(point))}</span>,
		...(onlyFrom && { onlyFrom }),
	});
	const given = frame === 'map';
	return [
		{ key: 'name', head: 'Mark', isRowHead: true, cell: (point) => point.name, orderBy: (point) => point.name },
		coordinate('x', 'X, m', ({ designM }) => designM[0]),
		coordinate('y', 'Y, m', ({ designM }) => designM[1]),
		coordinate('z', 'Z, m', ({ designM }) => designM[2]),
		...(given
			? [
					coordinate('e', 'Easting, m', ({ givenM }) => givenM[0], 'cabin'),
					coordinate('n', 'Northing, m', ({ givenM }) => givenM[1], 'cabin'),
					coordinate('h', 'Height, m', ({ givenM }) => givenM[2], 'cabin'),
				]
			: []),
		{
			key: 'sigma',
			head: 'σ plan, height, mm',
			align: 'end',
			cell: ({ sigmaPlanM, sigmaHeightM }) => `${millimetres(sigmaPlanM)}, ${millimetres(sigmaHeightM)}`,
			onlyFrom: 'tablet',
		},
		{ key: 'code', head: 'Code', cell: (point) => point.code, onlyFrom: 'cabin' },
	];
}

function millimetres(valueM: number | null): string {
	return valueM === null ? 'not known' : (valueM * 1000).toFixed(1);
}
