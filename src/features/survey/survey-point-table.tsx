import { useMemo } from 'react';
import type { SetupSummary, StoredSurveyPoint } from '#shared/survey/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { metres } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { type Column, Table, type TableGroup } from '#src/ui/table.tsx';

interface SurveyPointTableProps {
	points: readonly StoredSurveyPoint[];
	setups: readonly SetupSummary[];
	/** Null: this person takes no voided points back. */
	onTakeBack: ((setup: SetupSummary) => void) | null;
}

const columns: readonly Column<StoredSurveyPoint>[] = [
	{ key: 'row', head: 'Row', align: 'end', cell: (point) => point.row, widthPx: 80, onlyFrom: 'tablet' },
	{ key: 'name', head: 'Point', isRowHead: true, cell: (point) => point.name, orderBy: (point) => point.name },
	{
		key: 'kind',
		head: 'Is',
		cell: (point) => [point.isTarget && 'target', point.voidedReason !== undefined && 'voided'].filter(Boolean).join(', '),
		widthPx: 130,
	},
	{ key: 'x', head: 'x, m', align: 'end', cell: (point) => <span className="font-mono">{metres(point.surveyM[0])}</span> },
	{ key: 'y', head: 'y, m', align: 'end', cell: (point) => <span className="font-mono">{metres(point.surveyM[1])}</span> },
	{ key: 'z', head: 'z, m', align: 'end', cell: (point) => <span className="font-mono">{metres(point.surveyM[2])}</span> },
	{
		key: 'sigma',
		head: 'σ, mm',
		cell: (point) => point.sigmaM?.map((value) => (value * 1000).toFixed(1)).join(' ') ?? '',
		onlyFrom: 'cabin',
	},
	{
		key: 'offset',
		head: 'Offset, mm',
		align: 'end',
		cell: (point) => (point.offsetMm === 0 ? '' : point.offsetMm),
		onlyFrom: 'cabin',
		widthPx: 110,
	},
	{ key: 'code', head: 'Code', cell: (point) => point.code, onlyFrom: 'cabin', widthPx: 100 },
];

/** Points as they were measured, survey frame of their set-up. */
export function SurveyPointTable({ points, setups, onTakeBack }: SurveyPointTableProps) {
	const [chosen, choose] = useAddressState('at');
	const groups = useMemo(
		() =>
			setups.map((setup): TableGroup<StoredSurveyPoint> => {
				const rows = points.filter((point) => point.setupId === setup.setupId);
				const voided = rows.filter((point) => point.voidedReason !== undefined);
				const reasons = [...new Set(voided.map((point) => point.voidedReason))];
				return {
					key: setup.setupId,
					rows,
					head: (
						<>
							<b>Set-up {setup.name}</b> <span className="text-second">{rows.length}</span>
							{voided.length > 0 && (
								<span className="ml-3">
									<b>{voided.length} voided</b>: {reasons.join(' ')}{' '}
									{onTakeBack !== null && <Button onClick={() => onTakeBack(setup)}>Take back</Button>}
								</span>
							)}
						</>
					),
				};
			}),
		[points, setups, onTakeBack],
	);
	return (
		<Table
			caption="Points of this survey"
			columns={columns}
			groups={groups}
			keyOf={(point) => String(point.row)}
			chosenKey={chosen}
			onChoose={choose}
			scrollClass="max-h-[60dvh]"
		/>
	);
}
