import { useMemo, useState } from 'react';
import type { StoredElement } from '#shared/model/contract.ts';
import { newMark } from '#shared/model/mark-rules.ts';
import { type Column, Table, type TableGroup } from '#src/ui/table.tsx';
import type { Sorting } from '#src/ui/table-rows.ts';
import { classWords, storeyOf } from './model-place.ts';

interface ElementTableProps {
	elements: readonly StoredElement[];
	chosenId: string | null;
	onChoose: (elementId: string) => void;
	/** Names as they are being typed; null: they are not being changed. */
	typed: ReadonlyMap<string, string> | null;
	onType: (elementId: string, mark: string) => void;
}

/** Every element by storey with its mark; while names are given, each mark is a field. */
export function ElementTable({ elements, chosenId, onChoose, typed, onType }: ElementTableProps) {
	const [sorting, setSorting] = useState<Sorting | null>(null);
	const columns = useMemo(
		(): Column<StoredElement>[] => [
			{ key: 'title', head: 'Element', isRowHead: true, cell: (row) => row.title, orderBy: (row) => row.title },
			{
				key: 'mark',
				head: 'Mark',
				cell: (row) =>
					typed === null ? (
						<span className="font-mono">{row.mark}</span>
					) : (
						<MarkField element={row} typed={typed.get(row.elementId)} onType={onType} />
					),
				orderBy: (row) => row.mark,
				widthPx: typed === null ? 140 : 200,
			},
			{ key: 'class', head: 'Class', cell: (row) => classWords(row.class), orderBy: (row) => row.class, onlyFrom: 'tablet', widthPx: 168 },
			{
				key: 'checkpoints',
				head: 'Checkpoints',
				align: 'end',
				cell: (row) => row.checkpointCount,
				orderBy: (row) => row.checkpointCount,
				onlyFrom: 'tablet',
				widthPx: 116,
			},
		],
		[typed, onType],
	);
	const groups = useMemo(() => groupsOf(elements), [elements]);
	return (
		<Table
			caption="Elements of this revision"
			columns={columns}
			groups={groups}
			keyOf={(row) => row.elementId}
			chosenKey={chosenId}
			onChoose={onChoose}
			sorting={sorting}
			onSort={setSorting}
			scrollClass="max-h-[64dvh]"
			empty={<p className="p-4 text-second">No element is called so here.</p>}
		/>
	);
}

interface MarkFieldProps {
	element: StoredElement;
	typed: string | undefined;
	onType: (elementId: string, mark: string) => void;
}

function MarkField({ element, typed, onType }: MarkFieldProps) {
	const value = typed ?? element.mark;
	const parsed = newMark.safeParse(value);
	const why = parsed.success ? undefined : parsed.error.issues[0]?.message;
	return (
		<input
			aria-label={`Mark of ${element.title}`}
			value={value}
			maxLength={24}
			spellCheck={false}
			autoComplete="off"
			aria-invalid={why !== undefined || undefined}
			title={why}
			onChange={(event) => onType(element.elementId, event.currentTarget.value)}
			className="h-9 w-full min-w-36 rounded-corner border-[1.5px] border-field bg-sheet px-2 font-mono text-ink aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:h-11"
		/>
	);
}

function groupsOf(elements: readonly StoredElement[]): TableGroup<StoredElement>[] {
	const byStorey = new Map<string, StoredElement[]>();
	for (const element of elements) {
		const here = byStorey.get(storeyOf(element));
		if (here) here.push(element);
		else byStorey.set(storeyOf(element), [element]);
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
