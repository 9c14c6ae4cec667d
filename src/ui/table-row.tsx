import { memo } from 'react';
import { onlyFromClass, type TableColumn } from './table-column.ts';

interface TableRowProps<Row> {
	row: Row;
	columns: readonly TableColumn<Row>[];
	line: number;
	heightPx: number;
	isChosen: boolean;
	/** Undefined: rows cannot be chosen. */
	tabIndex: 0 | -1 | undefined;
	isWindowed: boolean;
	isInGroup: boolean;
}

function PlainTableRow<Row>({ row, columns, line, heightPx, isChosen, tabIndex, isWindowed, isInGroup }: TableRowProps<Row>) {
	return (
		<tr
			data-line={line}
			data-windowed={isWindowed || undefined}
			tabIndex={tabIndex}
			aria-current={isChosen || undefined}
			aria-rowindex={isWindowed ? line + 2 : undefined}
			style={{ height: heightPx }}
			className={`${isChosen ? 'row-chosen' : ''} ${tabIndex === undefined ? '' : 'cursor-pointer hover:bg-ground focus-visible:outline-offset-[-3px]'}`}
		>
			{columns.map((column) => (
				<Cell key={column.key} column={column} row={row} isInGroup={isInGroup} />
			))}
		</tr>
	);
}

/** Drawn again only when something of its own changes: a moved choice costs two rows, not the window. */
export const TableRow = memo(PlainTableRow) as typeof PlainTableRow;

function Cell<Row>({ column, row, isInGroup }: { column: TableColumn<Row>; row: Row; isInGroup: boolean }) {
	const classes = `border-b border-b-hair px-2 py-0 whitespace-nowrap ${column.align === 'end' ? 'text-right' : 'text-left'} ${column.onlyFrom ? onlyFromClass[column.onlyFrom] : ''}`;
	return column.isRowHead ? (
		<th scope="row" className={`${classes} ${isInGroup ? 'pl-5' : 'pl-4'} font-normal`}>
			{column.cell(row)}
		</th>
	) : (
		<td className={classes}>{column.cell(row)}</td>
	);
}
