import { type Range, useVirtualizer } from '@tanstack/react-virtual';
import { type KeyboardEvent, type MouseEvent, type ReactNode, useCallback, useEffect, useMemo, useRef } from 'react';
import { useIsCoarse } from '#src/lib/coarse-pointer.ts';
import { scrollStop } from './scroll-stop.ts';
import { onlyFromClass, type TableColumn } from './table-column.ts';
import { TableRow } from './table-row.tsx';
import { linesOf, type RowGroup, rowLineFrom, type Sorting, sortedGroups } from './table-rows.ts';
import { lineOffsets, windowParts, withKept } from './table-window.ts';

/** A column as data. */
export type Column<Row> = TableColumn<Row>;

/** Rows under a head of their own. */
export interface TableGroup<Row> extends RowGroup<Row> {
	head: ReactNode;
}

interface TableProps<Row> {
	/** What the table shows, for a screen reader. */
	caption: string;
	columns: readonly Column<Row>[];
	/** Either rows or groups. */
	rows?: readonly Row[];
	groups?: readonly TableGroup<Row>[];
	/** Stable, from the row itself; it is what stands in the address. */
	keyOf: (row: Row) => string;
	chosenKey?: string | null;
	onChoose?: (key: string, row: Row) => void;
	/** Enter or a second press on the chosen row. */
	onOpen?: (key: string, row: Row) => void;
	sorting?: Sorting | null;
	/** Null: back to the given order. */
	onSort?: (sorting: Sorting | null) => void;
	/** Height of its own scrolling box as a class: "max-h-[70dvh]". Without it only short tables should come here. */
	scrollClass?: string;
	rowHeightPx?: number;
	/** Shown in the table's place when there is no row at all. */
	empty?: ReactNode;
}

const windowFromLines = 80;
const headHeightPx = 40;

/**
 * A real table. Rows have one fixed height, so thousands are drawn by window, between spacer rows; the head stays; arrows, Home, End and
 * Page keys move the choice, which keeps the keyboard's focus even when it is scrolled away.
 */
export function Table<Row>(props: TableProps<Row>) {
	const { caption, columns, rows, keyOf, chosenKey = null, onChoose, onOpen, sorting = null, onSort, scrollClass = '', empty } = props;
	const isCoarse = useIsCoarse();
	const rowHeightPx = props.rowHeightPx ?? (isCoarse ? 48 : 44);
	const groupHeightPx = Math.min(rowHeightPx, isCoarse ? 48 : 46);
	const box = useRef<HTMLDivElement>(null);
	/** The line that keys have reached: presses come faster than the address follows, and none may be lost. */
	const reached = useRef<number | null>(null);

	const lines = useMemo(() => {
		const given: readonly TableGroup<Row>[] = props.groups ?? [{ key: '', head: null, rows: rows ?? [] }];
		const order = columns.find((column) => column.key === sorting?.key)?.orderBy;
		const ordered = sorting && order ? sortedGroups(given, order, sorting.isDescending) : given;
		const laidOut = linesOf<Row, TableGroup<Row>>(ordered, keyOf);
		return props.groups ? laidOut : laidOut.filter((line) => line.kind === 'row');
	}, [props.groups, rows, columns, sorting, keyOf]);
	const firstRowLine = lines.findIndex((line) => line.kind === 'row');
	const chosenLine = useMemo(() => lines.findIndex((line) => line.kind === 'row' && line.key === chosenKey), [lines, chosenKey]);
	// One row is in the tab order: the chosen one, else the first.
	const tabLine = chosenLine >= 0 ? chosenLine : firstRowLine;

	const heightsPx = useMemo(
		() => lines.map((line) => (line.kind === 'group' ? groupHeightPx : rowHeightPx)),
		[lines, groupHeightPx, rowHeightPx],
	);
	const offsets = useMemo(() => lineOffsets(heightsPx), [heightsPx]);

	const isWindowed = lines.length > windowFromLines && scrollClass !== '';
	const virtualizer = useVirtualizer({
		count: lines.length,
		getScrollElement: () => box.current,
		estimateSize: (index) => heightsPx[index] ?? rowHeightPx,
		overscan: 12,
		// The sticky head covers as much at the top as it shifts the rows down: only the foot needs room.
		scrollPaddingEnd: headHeightPx,
		rangeExtractor: useCallback((range: Range) => withKept(range, tabLine), [tabLine]),
		enabled: isWindowed,
		initialRect: { width: 800, height: 600 },
	});
	const parts = isWindowed
		? windowParts(
				virtualizer.getVirtualItems().map((item) => item.index),
				offsets,
			)
		: lines.map((_, index) => ({ kind: 'line' as const, index }));

	// The virtualizer keeps the sizes it was first told: other lines or another pointer are other sizes.
	useEffect(() => {
		if (heightsPx.length > 0) virtualizer.measure();
	}, [heightsPx, virtualizer]);

	// A choice made elsewhere (in the model, by a link) is brought into sight; one made here by key also gets the focus.
	const shownChoice = useRef<number>(-1);
	useEffect(() => {
		if (chosenLine < 0 || shownChoice.current === chosenLine) return;
		const isFirst = shownChoice.current === -1;
		shownChoice.current = chosenLine;
		if (isWindowed) virtualizer.scrollToIndex(chosenLine, { align: isFirst ? 'center' : 'auto' });
		if (reached.current !== null) {
			focusLine(box.current, chosenLine);
			if (reached.current === chosenLine) reached.current = null;
		} else if (!isWindowed && scrollClass !== '') lineElement(box.current, chosenLine)?.scrollIntoView?.({ block: 'nearest' });
	}, [chosenLine, isWindowed, scrollClass, virtualizer]);

	// Rows that can be chosen are stops themselves.
	const hasStops = onChoose !== undefined;
	useEffect(() => (hasStops || lines.length === 0 ? undefined : scrollStop(box.current)), [hasStops, lines]);

	const chooseLine = (index: number) => {
		const line = lines[index];
		if (line?.kind === 'row') onChoose?.(line.key, line.row);
	};
	const onKeyDown = (event: KeyboardEvent<HTMLTableSectionElement>) => {
		const at = lineOf(event.target, event.currentTarget);
		if (at === null || !onChoose || isWithinControl(event.target)) return;
		const line = lines[at];
		if (event.key === 'Enter' && line?.kind === 'row') {
			event.preventDefault();
			(onOpen ?? onChoose)(line.key, line.row);
			return;
		}
		const pageRows = Math.max(1, Math.floor((box.current?.clientHeight ?? 400) / rowHeightPx) - 2);
		const next = rowLineFrom(lines, reached.current ?? at, event.key, pageRows);
		if (next === null) return;
		event.preventDefault();
		reached.current = next === chosenLine ? null : next;
		chooseLine(next);
	};
	const onClick = (event: MouseEvent<HTMLTableSectionElement>) => {
		const at = lineOf(event.target, event.currentTarget);
		if (at === null || isWithinControl(event.target)) return;
		const line = lines[at];
		if (line?.kind === 'row' && at === chosenLine && onOpen && event.detail > 1) onOpen(line.key, line.row);
		else chooseLine(at);
	};
	const sortBy = (column: Column<Row>) => {
		if (sorting?.key !== column.key) onSort?.({ key: column.key, isDescending: false });
		else onSort?.(sorting.isDescending ? null : { key: column.key, isDescending: true });
	};

	if (firstRowLine < 0 && empty !== undefined) return empty;
	return (
		<div ref={box} className={`sheet overflow-auto ${scrollClass}`}>
			<table className="w-full border-separate border-spacing-0" aria-rowcount={isWindowed ? lines.length + 1 : undefined}>
				<caption className="sr-only">{caption}</caption>
				<thead>
					<tr aria-rowindex={isWindowed ? 1 : undefined}>
						{columns.map((column) => (
							<th
								key={column.key}
								scope="col"
								aria-sort={sorting?.key === column.key ? (sorting.isDescending ? 'descending' : 'ascending') : undefined}
								style={{ width: column.widthPx, height: headHeightPx }}
								className={`sticky top-0 z-[1] border-b border-b-ink bg-sheet px-2 text-small font-medium whitespace-nowrap text-second ${column.align === 'end' ? 'text-right' : 'text-left'} ${column.onlyFrom ? onlyFromClass[column.onlyFrom] : ''}`}
							>
								{column.orderBy && onSort ? (
									<button type="button" onClick={() => sortBy(column)} className="min-h-9 rounded-corner font-medium hover:text-ink">
										{column.head}
										<SortMark state={sorting?.key === column.key ? (sorting.isDescending ? 'down' : 'up') : 'none'} />
									</button>
								) : (
									column.head
								)}
							</th>
						))}
					</tr>
				</thead>
				<tbody onKeyDown={onKeyDown} onClick={onClick}>
					{parts.map((part) => {
						if (part.kind === 'space') {
							return (
								<tr key={`space ${part.before}`} style={{ height: part.heightPx }}>
									<td colSpan={columns.length} className="p-0" />
								</tr>
							);
						}
						const line = lines[part.index];
						if (!line) return null;
						if (line.kind === 'group') {
							return (
								<tr key={line.key} style={{ height: groupHeightPx }} aria-rowindex={isWindowed ? part.index + 2 : undefined}>
									<th
										colSpan={columns.length}
										scope="rowgroup"
										className="border-b border-b-hair bg-ground px-2 text-left font-strong whitespace-nowrap"
									>
										{line.group.head}
									</th>
								</tr>
							);
						}
						return (
							<TableRow
								key={line.key}
								row={line.row}
								columns={columns}
								line={part.index}
								heightPx={rowHeightPx}
								isChosen={part.index === chosenLine}
								tabIndex={onChoose ? (part.index === tabLine ? 0 : -1) : undefined}
								isWindowed={isWindowed}
								isInGroup={props.groups !== undefined}
							/>
						);
					})}
				</tbody>
			</table>
		</div>
	);
}

function SortMark({ state }: { state: 'up' | 'down' | 'none' }) {
	return (
		<svg width="10" height="12" viewBox="0 0 10 12" aria-hidden="true" className={`ml-1 inline ${state === 'none' ? 'opacity-40' : ''}`}>
			{state !== 'down' && <path d="M1.500 5L5 1L8.500 5" className="fill-none stroke-current" strokeWidth="1.600" />}
			{state !== 'up' && <path d="M1.500 7L5 11L8.500 7" className="fill-none stroke-current" strokeWidth="1.600" />}
		</svg>
	);
}

function lineElement(box: HTMLElement | null, line: number): HTMLElement | null {
	return box?.querySelector<HTMLElement>(`tr[data-line="${line}"]`) ?? null;
}

/** Gives a row the focus, as soon as the window has drawn it. */
function focusLine(box: HTMLElement | null, line: number, tries = 4): void {
	const row = lineElement(box, line);
	if (row) row.focus({ preventScroll: true });
	if (row && !row.hasAttribute('data-windowed')) row.scrollIntoView?.({ block: 'nearest' });
	if (!row && tries > 0) requestAnimationFrame(() => focusLine(box, line, tries - 1));
}

/** The line an event in the body came from. */
function lineOf(target: EventTarget, body: HTMLElement): number | null {
	if (!(target instanceof Element)) return null;
	const row = target.closest('tr[data-line]');
	return row && body.contains(row) ? Number(row.getAttribute('data-line')) : null;
}

function isWithinControl(target: EventTarget): boolean {
	return target instanceof Element && target.closest('a, button, input, select, textarea, label') !== null;
}
