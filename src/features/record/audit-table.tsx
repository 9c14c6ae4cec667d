import type { AuditLine } from '#shared/record/contract.ts';
import { isoMoment } from '#src/lib/format.ts';
import { type Column, Table } from '#src/ui/table.tsx';
import { detailWords, kindWords } from './audit-words.ts';

interface AuditTableProps {
	entries: readonly AuditLine[];
	timeZone: string;
	/** "Site engineer, observer" of the roles' own names. */
	roleWords: (roles: readonly string[]) => string;
	chosenId: string | null;
	onChoose: (entryId: string | null) => void;
}

/** Who did what, as what, when: the newest first. */
export function AuditTable({ entries, timeZone, roleWords, chosenId, onChoose }: AuditTableProps) {
	const columns: Column<AuditLine>[] = [
		{
			key: 'at',
			head: 'When',
			cell: ({ at }) => <span className="whitespace-nowrap">{isoMoment(at, timeZone)}</span>,
			widthPx: 150,
			onlyFrom: 'tablet',
		},
		{
			key: 'kind',
			head: 'Act',
			isRowHead: true,
			// On a phone there is no room for a column of times: they stand above the words.
			cell: ({ at, kind }) => (
				<>
					<span className="block text-small leading-tight font-normal text-second tablet:hidden">{isoMoment(at, timeZone)}</span>
					{kindWords(kind)}
				</>
			),
		},
		{ key: 'who', head: 'Who', cell: ({ who }) => who?.name ?? 'whoever had the link' },
		{ key: 'as', head: 'As', cell: ({ roles }) => roleWords(roles), onlyFrom: 'cabin' },
		{ key: 'what', head: 'Details', cell: ({ data }) => <span className="line-clamp-1">{detailWords(data)}</span>, onlyFrom: 'desk' },
	];
	return (
		<Table
			caption="Acts on this site"
			columns={columns}
			rows={entries}
			keyOf={({ entryId }) => entryId}
			chosenKey={chosenId}
			onChoose={(entryId) => onChoose(entryId === chosenId ? null : entryId)}
			scrollClass="max-h-[60dvh]"
		/>
	);
}

interface AuditDetailProps {
	entry: AuditLine;
	timeZone: string;
	roleWords: (roles: readonly string[]) => string;
	/** Narrows the list to the same thing. */
	onSameThing: (subjectId: string) => void;
}

/** All that one entry holds. */
export function AuditDetail({ entry, timeZone, roleWords, onSameThing }: AuditDetailProps) {
	const facts: [string, string][] = [
		['When', isoMoment(entry.at, timeZone)],
		['Who', entry.who?.name ?? 'whoever had the link'],
		['As', roleWords(entry.roles)],
		['From', entry.address ?? ''],
		...Object.entries(entry.data).map(([key, value]): [string, string] => [key, typeof value === 'string' ? value : JSON.stringify(value)]),
	];
	const { subjectId } = entry;
	return (
		<section aria-label="The chosen act" className="sheet mt-4 px-4.5 py-4">
			<h2 className="m-0 mb-2 text-h2 font-strong">{kindWords(entry.kind)}</h2>
			<dl className="m-0 mb-3 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1">
				{facts
					.filter(([, fact]) => fact !== '')
					.map(([word, fact]) => (
						<div key={word} className="contents">
							<dt className="text-second">{word}</dt>
							<dd className="m-0 min-w-0 break-words">{fact}</dd>
						</div>
					))}
			</dl>
			{subjectId !== null && (
				<button
					type="button"
					onClick={() => onSameThing(subjectId)}
					className="min-h-9 text-action underline underline-offset-3 pointer-coarse:min-h-12"
				>
					All that was done to this thing
				</button>
			)}
		</section>
	);
}
