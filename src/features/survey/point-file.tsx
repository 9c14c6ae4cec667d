import { type ReactNode, useMemo, useState } from 'react';
import { inspectPointTable, type PointTableInspection } from '#shared/survey/inspect-point-table.ts';
import { lengthUnits, type PointTableReading } from '#shared/survey/point-table-schema.ts';
import { type PointTable, readPointTable } from '#shared/survey/read-point-table.ts';
import { count, counted, metres } from '#src/lib/format.ts';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { FileDrop } from '#src/ui/file-drop.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { ColumnHeads } from './column-heads.tsx';
import { firstWish, inspectionWords, type ReadingWish, readingOf, unitWords, withField, withOrder } from './point-file-reading.ts';
import { RowFaults } from './row-faults.tsx';

/** A file whose every row could be read, and how. */
export interface ReadFile {
	file: File;
	reading: PointTableReading;
	table: PointTable;
}

interface PointFileProps {
	label: string;
	hint: string;
	/** Control may lack plan or height. */
	mayLackCoordinates: boolean;
	/** What was said the last time an order had to be asked. */
	columnOrder: 'PENZD' | 'PNEZD' | null;
	/** Faults beyond single rows: names that stand twice. */
	faultsOf?: (table: PointTable) => string[];
	/** What comes next, once every row can be read. */
	children: (read: ReadFile) => ReactNode;
}

type Dropped = { file: File; bytes: Uint8Array; inspection: PointTableInspection } | { file: File; refused: string };

/** A point file from drop to rows: what was recognised, what must be said, which rows cannot be read and why. Nothing is sent before all is well. */
export function PointFile({ label, hint, mayLackCoordinates, columnOrder, faultsOf, children }: PointFileProps) {
	const [dropped, setDropped] = useState<Dropped | null>(null);
	const [wish, setWish] = useState<ReadingWish | null>(null);
	const take = async (file: File) => {
		const bytes = new Uint8Array(await file.arrayBuffer());
		const inspection = inspectPointTable(bytes);
		if ('refused' in inspection) {
			setDropped({ file, refused: inspection.refused });
			setWish(null);
			return;
		}
		setDropped({ file, bytes, inspection });
		setWish(firstWish(inspection, columnOrder));
	};
	return (
		<div className="flex flex-col gap-5">
			<FileDrop
				label={label}
				hint={hint}
				accept=".csv,.txt,.tsv,.asc,.pts"
				file={dropped?.file ?? null}
				onFile={take}
				error={dropped && 'refused' in dropped ? `${dropped.refused} Nothing of it was stored.` : null}
			/>
			{dropped && !('refused' in dropped) && wish && (
				<ReadWell
					// Another file starts from its own proposal.
					key={`${dropped.file.name} ${dropped.file.size} ${dropped.file.lastModified}`}
					{...dropped}
					wish={wish}
					onWish={setWish}
					mayLackCoordinates={mayLackCoordinates}
					faultsOf={faultsOf}
				>
					{children}
				</ReadWell>
			)}
		</div>
	);
}

interface ReadWellProps {
	file: File;
	bytes: Uint8Array;
	inspection: PointTableInspection;
	wish: ReadingWish;
	onWish: (wish: ReadingWish) => void;
	mayLackCoordinates: boolean;
	faultsOf: ((table: PointTable) => string[]) | undefined;
	children: (read: ReadFile) => ReactNode;
}

function ReadWell({ file, bytes, inspection, wish, onWish, mayLackCoordinates, faultsOf, children }: ReadWellProps) {
	const asked = useMemo(() => readingOf(inspection, wish, mayLackCoordinates), [inspection, wish, mayLackCoordinates]);
	const reading = 'reading' in asked ? asked.reading : null;
	const table = useMemo(
		() => (reading ? readPointTable(bytes, reading, { mayLackCoordinates, mayBeHeights: !mayLackCoordinates }) : null),
		[bytes, mayLackCoordinates, reading],
	);
	const whole = useMemo(() => (table && table.faultCount === 0 ? (faultsOf?.(table) ?? []) : []), [table, faultsOf]);
	return (
		<>
			<section aria-label="How the file is read" className="flex flex-col gap-4">
				<p className="m-0">{inspectionWords(inspection, wish)}</p>
				{inspection.findings.map((finding) => (
					<p key={finding.code} className="m-0 font-medium">
						{finding.message}
					</p>
				))}
				{inspection.needs.includes('order') && (
					<ChoiceGroup
						legend="Which comes first, easting or northing?"
						hint="The file has no header, and both orders are usual."
						isRow
						value={wish.order}
						onChange={(order) => onWish(withOrder(inspection, wish, order))}
						options={inspection.orders.map(({ order, rows }) => ({
							value: order,
							label: order === 'PENZD' ? 'Easting first (PENZD)' : 'Northing first (PNEZD)',
							detail:
								rows[0] && `${rows[0].name}: E ${metres(rows[0].easting)}, N ${metres(rows[0].northing)}, H ${metres(rows[0].height)}`,
						}))}
					/>
				)}
				<div className="grid gap-4 tablet:grid-cols-2">
					<ChoiceGroup
						legend="Unit of coordinates and σ"
						isRow
						value={wish.unit}
						onChange={(unit) => onWish({ ...wish, unit })}
						options={lengthUnits.map((unit) => ({ value: unit, label: unitWords[unit] }))}
					/>
					{inspection.delimiter !== ',' && (
						<ChoiceGroup
							legend="Decimal mark"
							isRow
							value={wish.decimalMark}
							onChange={(decimalMark) => onWish({ ...wish, decimalMark })}
							options={[
								{ value: '.', label: 'point: 1.234' },
								{ value: ',', label: 'comma: 1,234' },
							]}
						/>
					)}
				</div>
				<ColumnHeads inspection={inspection} columns={wish.columns} onField={(column, field) => onWish(withField(wish, column, field))} />
			</section>
			{'missing' in asked && (
				<Notice kind="note" title={asked.missing}>
					Nothing is stored before that.
				</Notice>
			)}
			{table && table.faultCount > 0 && <RowFaults table={table} />}
			{table && whole.length > 0 && (
				<Notice kind="wrong" title={whole[0] ?? ''}>
					{whole.length > 1 && `${whole.slice(1, 6).join(' ')} ${whole.length > 6 ? `And ${whole.length - 6} more.` : ''}`}{' '}
					{counted(table.rows.length, 'row')} read, none stored yet.
				</Notice>
			)}
			{table && reading && table.faultCount === 0 && whole.length === 0 && (
				<>
					<p className="m-0 font-medium">All {count(table.rows.length)} rows can be read.</p>
					{children({ file, reading, table })}
				</>
			)}
		</>
	);
}
