import type { PointTableInspection } from '#shared/survey/inspect-point-table.ts';
import { type PointField, type PointTableReading, pointFields } from '#shared/survey/point-table-schema.ts';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import { fieldWords } from './point-file-reading.ts';

interface ColumnHeadsProps {
	inspection: PointTableInspection;
	columns: PointTableReading['columns'];
	onField: (column: number, field: PointField | null) => void;
}

/** The file's first rows, each column under what it is taken for; a wrong one is put right in its head. */
export function ColumnHeads({ inspection, columns, onField }: ColumnHeadsProps) {
	const fieldOf = new Map(Object.entries(columns).map(([field, column]) => [column, field]));
	const rows = [0, 1, 2].filter((row) => inspection.columns.some((column) => column.samples[row]));
	return (
		<div ref={scrollStop} className="sheet overflow-x-auto">
			<table className="w-full border-collapse">
				<caption className="sr-only">First rows of the file</caption>
				<thead>
					<tr>
						{inspection.columns.map((column) => (
							<th key={column.index} scope="col" className="border-b border-ink px-2 py-2 text-left align-bottom font-medium">
								<span className="block text-small text-second">{column.header ?? `column ${column.index + 1}`}</span>
								<select
									aria-label={`Column ${column.index + 1}${column.header ? `, ${column.header}` : ''}, is`}
									value={fieldOf.get(column.index) ?? ''}
									onChange={(event) => onField(column.index, (event.currentTarget.value || null) as PointField | null)}
									className="mt-1 min-h-10 w-full min-w-32 rounded-corner border border-field bg-sheet px-2 text-ink pointer-coarse:min-h-12"
								>
									<option value="">not used</option>
									{pointFields.map((field) => (
										<option key={field} value={field}>
											{fieldWords[field]}
										</option>
									))}
								</select>
							</th>
						))}
					</tr>
				</thead>
				<tbody>
					{rows.map((row) => (
						<tr key={row} className="border-b border-hair">
							{inspection.columns.map((column) => (
								<td
									key={column.index}
									className={`h-9 max-w-60 truncate px-2 font-mono ${column.isNumeric ? 'text-right' : ''} ${fieldOf.has(column.index) ? '' : 'text-second'}`}
								>
									{column.samples[row] ?? ''}
								</td>
							))}
						</tr>
					))}
				</tbody>
			</table>
		</div>
	);
}
