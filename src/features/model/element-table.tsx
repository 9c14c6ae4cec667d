import { useMemo, useState } from 'react';
import type { StoredElement } from '#shared/model/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { metres } from '#src/lib/format.ts';
import { type Column, Table, type TableGroup } from '#src/ui/table.tsx';
import type { Sorting } from '#src/ui/table-rows.ts';

interface ElementTableProps {
	elements: readonly StoredElement[];
	/** Entity number → why it has no checkpoint. */
	whyNone: ReadonlyMap<number, string>;
}

const columns: readonly Column<StoredElement>[] = [
	{ key: 'title', head: 'Element', isRowHead: true, cell: (row) => row.title, orderBy: (row) => row.title },
	{ key: 'mark', head: 'Mark', cell: (row) => <span className="font-mono">{row.mark}</span>, orderBy: (row) => row.mark, widthPx: 150 },
	{
		key: 'class',
		head: 'Class',
		cell: (row) => row.class.replace(/^Ifc/, ''),
		orderBy: (row) => row.class,
		onlyFrom: 'tablet',
		widthPx: 190,
	},
	{ key: 'tag', head: 'Tag', cell: (row) => row.tag, orderBy: (row) => row.tag, onlyFrom: 'cabin', widthPx: 110 },
	{
		key: 'height',
		head: 'Height, m',
		align: 'end',
		cell: (row) => metres(row.sizesM.height),
		orderBy: (row) => row.sizesM.height,
		onlyFrom: 'cabin',
		widthPx: 110,
	},
	{
		key: 'checkpoints',
		head: 'Checkpoints',
		align: 'end',
		cell: (row) => row.checkpointCount,
		orderBy: (row) => row.checkpointCount,
		widthPx: 130,
	},
];

/** Every element by storey, what got checkpoints and what not. */
export function ElementTable({ elements, whyNone }: ElementTableProps) {
	const [find, setFind] = useAddressState('find');
	const [chosen, choose] = useAddressState('at');
	const [sorting, setSorting] = useState<Sorting | null>(null);
	const groups = useMemo(() => groupsOf(elements, find ?? ''), [elements, find]);
	const chosenElement = elements.find((element) => element.elementId === chosen);
	return (
		<div className="flex flex-col gap-3">
			<label className="flex max-w-96 flex-col gap-1 font-medium">
				Find
				<input
					type="search"
					value={find ?? ''}
					onChange={(event) => setFind(event.currentTarget.value || null)}
					placeholder="C/3, wall, ground …"
					className="min-h-11 rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body font-normal text-ink placeholder:text-second pointer-coarse:min-h-12"
				/>
			</label>
			<Table
				caption="Elements of this revision"
				columns={columns}
				groups={groups}
				keyOf={(row) => row.elementId}
				chosenKey={chosen}
				onChoose={choose}
				sorting={sorting}
				onSort={setSorting}
				scrollClass="max-h-[60dvh]"
				empty={<p className="p-4 text-second">No element is called so.</p>}
			/>
			{chosenElement && (
				<dl className="sheet m-0 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1 px-4.5 py-4">
					{detailsOf(chosenElement, whyNone).map(([name, value]) => (
						<div key={name} className="contents">
							<dt className="text-second">{name}</dt>
							<dd className="m-0 break-all">{value}</dd>
						</div>
					))}
				</dl>
			)}
		</div>
	);
}

function detailsOf(element: StoredElement, whyNone: ReadonlyMap<number, string>): [string, string][] {
	const { length, height, thickness } = element.sizesM;
	const rows: [string, string][] = [
		['Element', element.title],
		['Name in the file', element.name || '–'],
		['Storey', element.storey || '–'],
		['Length, height, thickness', `${metres(length)}, ${metres(height)}, ${metres(thickness)} m`],
		['GlobalId', element.globalId],
	];
	const why = whyNone.get(element.entityNumber);
	if (why) rows.push(['No checkpoint, because', why]);
	return rows;
}

function groupsOf(elements: readonly StoredElement[], find: string): TableGroup<StoredElement>[] {
	const words = find.toLowerCase().split(/\s+/).filter(Boolean);
	const byStorey = new Map<string, StoredElement[]>();
	for (const element of elements) {
		const text = `${element.title} ${element.mark} ${element.class} ${element.tag} ${element.name} ${element.storey}`.toLowerCase();
		if (!words.every((word) => text.includes(word))) continue;
		const storey = element.storey || 'On no storey';
		const here = byStorey.get(storey);
		if (here) here.push(element);
		else byStorey.set(storey, [element]);
	}
	return [...byStorey].map(([storey, rows]) => ({
		key: storey,
		rows,
		head: (
			<>
				<b>{storey}</b> <span className="text-second">{rows.length}</span>
			</>
		),
	}));
}
