import { useMutation, useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { useMemo, useState } from 'react';
import { useNavigate } from 'react-router-dom';
import type { StoredElement } from '#shared/model/contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { count, counted } from '#src/lib/format.ts';
import { useAddressId, useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { type Column, Table } from '#src/ui/table.tsx';
import { Choose, Search } from './element-filters.tsx';

type Row = StoredElement & { modelId: string };
const keyOf = ({ modelId, globalId }: { modelId: string; globalId: string }): string => `${modelId} ${globalId}`;

/** Which elements are concreted together: chosen in a table by storey, class and mark, several at once; and whose they are. */
export default function PourElementsPage() {
	const site = useSite();
	const { siteId } = site;
	const pourId = useAddressId('pourId');
	const mayWrite = useMay('pour.write');
	const navigate = useNavigate();
	const queries = useQueryClient();
	const [{ data: pour }, { data: shown }, { data: models }] = useSuspenseQueries({
		queries: [
			api.pour.get.queryOptions({ input: { siteId, pourId } }),
			api.pour.shown.queryOptions({ input: { siteId, pourId, point: 'before-pour' } }),
			api.model.list.queryOptions({ input: { siteId } }),
		],
	});
	const newest = models.flatMap(({ modelId, revisions }) => {
		const revision = revisions.find(({ state }) => state === 'ready');
		return revision === undefined ? [] : [{ modelId, revisionId: revision.revisionId }];
	});
	const read = useSuspenseQueries({
		queries: newest.map(({ revisionId }) => api.model.elements.queryOptions({ input: { siteId, revisionId } })),
	});
	const rows: Row[] = read.flatMap(({ data }, index) =>
		data.filter(({ globalId }) => globalId !== '').map((element) => ({ ...element, modelId: newest[index]?.modelId ?? '' })),
	);
	const before = useMemo(() => new Set(shown.shown.elements.map(keyOf)), [shown]);
	const companyOf = useMemo(() => new Map(shown.shown.elements.map((one) => [keyOf(one), one.company])), [shown]);
	const [chosen, setChosen] = useState<ReadonlySet<string>>(before);
	const [storey, setStorey] = useState('');
	const [elementClass, setClass] = useState('');
	const [text, setText] = useState('');
	const [companyId, setCompany] = useState('');
	const words = text.trim().toLowerCase();
	const filtered = rows.filter(
		(row) =>
			(storey === '' || row.storey === storey) &&
			(elementClass === '' || row.class === elementClass) &&
			(words === '' || `${row.mark} ${row.title}`.toLowerCase().includes(words)),
	);
	const add = rows.filter((row) => chosen.has(keyOf(row)) && !before.has(keyOf(row)));
	const takeOut = shown.shown.elements.filter((one) => !chosen.has(keyOf(one)));
	const refs = (of: readonly { modelId: string; globalId: string }[]) => of.map(({ modelId, globalId }) => ({ modelId, globalId }));
	const refresh = () => Promise.all([api.pour.key(), api.check.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
	const change = useMutation(api.pour.changeElements.mutationOptions({ onSuccess: refresh }));
	const give = useMutation(api.pour.giveElements.mutationOptions({ onSuccess: refresh }));
	const fault = change.error ?? give.error;
	const toggle = (keys: readonly string[], isOn: boolean) =>
		setChosen((old) => {
			const next = new Set(old);
			for (const key of keys)
				if (isOn) next.add(key);
				else next.delete(key);
			return next;
		});
	const given = filtered.filter((row) => before.has(keyOf(row)));
	const isAll = filtered.length > 0 && filtered.every((row) => chosen.has(keyOf(row)));
	const columns: Column<Row>[] = [
		{
			key: 'choose',
			head: (
				<input
					type="checkbox"
					aria-label="Choose all that are shown"
					checked={isAll}
					onChange={() => toggle(filtered.map(keyOf), !isAll)}
					className="size-5 align-middle accent-ink"
				/>
			),
			widthPx: 44,
			cell: (row) => (
				<label className="grid size-11 place-items-center">
					<input
						type="checkbox"
						aria-label={row.title || row.mark}
						checked={chosen.has(keyOf(row))}
						onChange={(event) => toggle([keyOf(row)], event.target.checked)}
						className="size-5 accent-ink"
					/>
				</label>
			),
		},
		{ key: 'element', head: 'Element', isRowHead: true, cell: (row) => row.title || row.mark, orderBy: (row) => row.title || row.mark },
		{ key: 'storey', head: 'Storey', onlyFrom: 'tablet', cell: (row) => row.storey || 'no storey', orderBy: (row) => row.storey },
		{ key: 'class', head: 'Class', onlyFrom: 'tablet', cell: (row) => row.class.replace(/^Ifc/, ''), orderBy: (row) => row.class },
		{ key: 'company', head: 'Belongs to', cell: (row) => (before.has(keyOf(row)) ? (companyOf.get(keyOf(row)) ?? pour.companyName) : '') },
	];
	const whyNot = !mayWrite
		? 'The project engineer says what is concreted together.'
		: add.length + takeOut.length === 0
			? 'Nothing is chosen otherwise than before.'
			: chosen.size === 0
				? 'A pour has one element at least.'
				: null;
	return (
		<>
			<Strip items={[pour.companyName, counted(rows.length, 'element in the models', 'elements in the models')]} />
			<Headline
				title={`Pour ${pour.number}, ${pour.name}`}
				acts={
					<Button
						weight="act"
						whyNot={whyNot}
						isBusy={change.isPending}
						onClick={() =>
							change.mutate(
								{ siteId, pourId, add: refs(add), takeOut: refs(takeOut) },
								{ onSuccess: () => navigate(`/sites/${siteId}/pours/${pourId}`) },
							)
						}
					>
						Keep {counted(chosen.size, 'element')}
					</Button>
				}
			>
				{`${counted(chosen.size, 'element')}: ${add.length} more, ${takeOut.length} fewer than before`}
			</Headline>
			{fault && (
				<Notice kind="wrong" title={refusalOf(fault).message}>
					Nothing was changed.
				</Notice>
			)}
			<div className="my-3 grid gap-3 tablet:grid-cols-3">
				<Search label="Mark or title" value={text} onChange={setText} />
				<Choose label="Storey" value={storey} onChange={setStorey} options={optionsOf(rows, (row) => row.storey)} all="All storeys" />
				<Choose label="Class" value={elementClass} onChange={setClass} options={optionsOf(rows, (row) => row.class)} all="All classes" />
			</div>
			{mayWrite && (
				<div className="mb-3 flex flex-wrap items-end gap-2.5">
					<Choose
						label={`The ${count(given.length)} of this pour that are shown belong to`}
						value={companyId}
						onChange={setCompany}
						options={site.companies.map((one) => ({ value: one.companyId, label: one.name }))}
						all={`${pour.companyName}, as the pour`}
					/>
					<Button
						whyNot={given.length === 0 ? 'None of this pour is shown.' : null}
						isBusy={give.isPending}
						onClick={() => give.mutate({ siteId, pourId, elements: refs(given), companyId: companyId === '' ? null : companyId })}
					>
						Say so
					</Button>
				</div>
			)}
			<Table
				rows={filtered}
				columns={columns}
				keyOf={keyOf}
				caption="Elements"
				scrollClass="max-h-[70dvh]"
				empty={<Notice kind="empty" title="No element is like that" />}
			/>
		</>
	);
}

function optionsOf(rows: readonly Row[], of: (row: Row) => string): { value: string; label: string }[] {
	return [...new Set(rows.map(of))].filter((one) => one !== '').map((value) => ({ value, label: value.replace(/^Ifc/, '') }));
}
