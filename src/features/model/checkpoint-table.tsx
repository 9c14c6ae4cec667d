import { useMemo, useState } from 'react';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import type { Requirement } from '#shared/model/requirement.ts';
import { type Column, Table, type TableGroup } from '#src/ui/table.tsx';
import type { Sorting } from '#src/ui/table-rows.ts';

interface CheckpointTableProps {
	/** Of the elements that are looked at, in the order of the file. */
	elements: readonly StoredElement[];
	ofElement: ReadonlyMap<string, readonly StoredCheckpoint[]>;
	chosenId: string | null;
	onChoose: (checkpointId: string) => void;
	/** Ticked for one act on many. */
	ticked: ReadonlySet<string>;
	onTick: (ids: readonly string[], isTicked: boolean) => void;
	mayTick: boolean;
}

export const requirementWords: Readonly<Record<Requirement, string>> = {
	required: 'required',
	'by-sample': 'by sample',
	'left-out': 'left out',
};

/** Every checkpoint by element: where it is, what is asked there, whether it is asked for. Ticked ones are chosen for together. */
export function CheckpointTable({ elements, ofElement, chosenId, onChoose, ticked, onTick, mayTick }: CheckpointTableProps) {
	const [sorting, setSorting] = useState<Sorting | null>(null);
	const columns = useMemo((): Column<StoredCheckpoint>[] => {
		const tick: Column<StoredCheckpoint> = {
			key: 'tick',
			head: <span className="sr-only">Chosen together</span>,
			cell: (row) => (
				<Tick label={`${row.mark}, ${row.label}`} isTicked={ticked.has(row.id)} onTick={(isTicked) => onTick([row.id], isTicked)} />
			),
			widthPx: 52,
		};
		return [
			...(mayTick ? [tick] : []),
			{
				key: 'label',
				head: 'Where',
				isRowHead: true,
				cell: (row) => <span className={row.requirement === 'left-out' ? 'text-second line-through' : ''}>{row.label}</span>,
				orderBy: (row) => row.label,
			},
			{ key: 'mark', head: 'Mark', cell: (row) => <span className="font-mono">{row.mark}</span>, orderBy: (row) => row.mark, widthPx: 124 },
			{
				key: 'kind',
				head: 'Asked',
				cell: (row) => row.characteristic,
				orderBy: (row) => row.characteristic,
				onlyFrom: 'tablet',
				widthPx: 84,
			},
			{
				key: 'requirement',
				head: 'For a pour',
				cell: (row) => (
					<span title={row.choice?.reason ?? undefined}>
						{requirementWords[row.requirement]}
						{row.added && <span className="text-second"> · placed by hand</span>}
					</span>
				),
				orderBy: (row) => row.requirement,
				onlyFrom: 'tablet',
				widthPx: 120,
			},
		];
	}, [mayTick, ticked, onTick]);
	const groups = useMemo(
		() =>
			elements.flatMap((element): TableGroup<StoredCheckpoint>[] => {
				const rows = ofElement.get(element.elementId) ?? [];
				if (rows.length === 0) return [];
				const ids = rows.map(({ id }) => id);
				return [
					{
						key: element.elementId,
						rows,
						head: (
							<span className="flex items-center gap-2">
								{mayTick && (
									<Tick
										label={`All of ${element.title}`}
										isTicked={ids.every((id) => ticked.has(id))}
										onTick={(isTicked) => onTick(ids, isTicked)}
									/>
								)}
								<b>{element.title}</b> <span className="font-mono text-second">{element.mark}</span>
							</span>
						),
					},
				];
			}),
		[elements, ofElement, mayTick, ticked, onTick],
	);
	return (
		<Table
			caption="Checkpoints of this revision"
			columns={columns}
			groups={groups}
			keyOf={(row) => row.id}
			chosenKey={chosenId}
			onChoose={onChoose}
			sorting={sorting}
			onSort={setSorting}
			scrollClass="max-h-[64dvh]"
			empty={<p className="p-4 text-second">No checkpoint here. Widen the search, or see below why elements have none.</p>}
		/>
	);
}

function Tick({ label, isTicked, onTick }: { label: string; isTicked: boolean; onTick: (isTicked: boolean) => void }) {
	return (
		<label className="grid size-9 cursor-pointer place-items-center pointer-coarse:size-12">
			<input
				type="checkbox"
				aria-label={label}
				checked={isTicked}
				onChange={(event) => onTick(event.currentTarget.checked)}
				className="size-5 accent-ink"
			/>
		</label>
	);
}
