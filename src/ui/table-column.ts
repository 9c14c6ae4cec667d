import type { ReactNode } from 'react';
import type { SortValue } from './table-rows.ts';

/** A column of a table as data: its head, its cells, and how it orders the rows. */
export interface TableColumn<Row> {
	key: string;
	/** With the unit: "Deviation, mm". */
	head: ReactNode;
	cell: (row: Row) => ReactNode;
	/** `end`: figures. */
	align?: 'start' | 'end';
	/** The head becomes a press that orders the rows. */
	orderBy?: (row: Row) => SortValue;
	/** This cell names the row; one column has it. */
	isRowHead?: boolean;
	/** Left out on narrower screens. */
	onlyFrom?: 'tablet' | 'cabin' | 'desk';
	widthPx?: number;
}

/** The classes that leave a column out on narrower screens. */
export const onlyFromClass = { tablet: 'max-tablet:hidden', cabin: 'max-cabin:hidden', desk: 'max-desk:hidden' } as const;
