/** @vitest-environment jsdom */
import { cleanup, fireEvent, render, screen, within } from '@testing-library/react';
import fc from 'fast-check';
import { useState } from 'react';
import { afterEach, describe, expect, it } from 'vitest';
import { type Column, Table } from '#src/ui/table.tsx';
import { type Sorting, sortedRows } from '#src/ui/table-rows.ts';
import { lineOffsets, windowParts } from '#src/ui/table-window.ts';

interface Row {
	name: string;
	valueMm: number | null;
}
const columns: Column<Row>[] = [
	{ key: 'name', head: 'Where', cell: (row) => row.name, isRowHead: true },
	{ key: 'value', head: 'Deviation, mm', cell: (row) => row.valueMm ?? '–', align: 'end', orderBy: (row) => row.valueMm },
];
const keyOf = (row: Row) => row.name;
const rowsOf = (count: number): Row[] => Array.from({ length: count }, (_, index) => ({ name: `row ${index}`, valueMm: index }));

afterEach(cleanup);

function Harness({ rows, isGrouped = false, scrollClass = '' }: { rows: Row[]; isGrouped?: boolean; scrollClass?: string }) {
	const [chosen, choose] = useState<string | null>(null);
	const [sorting, sort] = useState<Sorting | null>(null);
	const groups = [
		{ key: 'a', head: 'Column A', rows: rows.slice(0, 2) },
		{ key: 'b', head: 'Column B', rows: rows.slice(2) },
	];
	return (
		<Table
			caption="Deviations"
			columns={columns}
			{...(isGrouped ? { groups } : { rows })}
			keyOf={keyOf}
			chosenKey={chosen}
			onChoose={choose}
			sorting={sorting}
			onSort={sort}
			scrollClass={scrollClass}
		/>
	);
}
const chosenName = () => document.querySelector('tr[aria-current="true"] th')?.textContent ?? null;
const focusedName = () => document.activeElement?.querySelector('th')?.textContent ?? null;
const press = (key: string) => fireEvent.keyDown(document.activeElement ?? document.body, { key });

describe('the table under the keyboard', () => {
	it('has one row in the tab order and moves the choice, with the focus, by arrows, Home and End', () => {
		render(<Harness rows={rowsOf(5)} />);
		const inOrder = [...document.querySelectorAll('tbody tr')].filter((row) => row.getAttribute('tabindex') === '0');
		expect(inOrder).toHaveLength(1);
		(inOrder[0] as HTMLElement).focus();
		press('ArrowDown');
		expect([chosenName(), focusedName()]).toEqual(['row 1', 'row 1']);
		press('End');
		expect([chosenName(), focusedName()]).toEqual(['row 4', 'row 4']);
		press('ArrowDown');
		expect(chosenName()).toBe('row 4');
		press('Home');
		press('ArrowUp');
		expect([chosenName(), focusedName()]).toEqual(['row 0', 'row 0']);
	});

	it('jumps over the heads of groups', () => {
		render(<Harness rows={rowsOf(4)} isGrouped />);
		fireEvent.click(screen.getByText('row 1'));
		(document.querySelector('tr[aria-current="true"]') as HTMLElement).focus();
		press('ArrowDown');
		expect(chosenName()).toBe('row 2');
		fireEvent.click(screen.getByText('Column A'));
		expect(chosenName()).toBe('row 2');
	});

	it('orders by a press on a head, nulls last both ways, and back to the given order', () => {
		render(
			<Harness
				rows={[
					{ name: 'b', valueMm: 2 },
					{ name: 'none', valueMm: null },
					{ name: 'a', valueMm: -1 },
				]}
			/>,
		);
		const names = () =>
			within(screen.getByRole('table'))
				.getAllByRole('rowheader')
				.map((cell) => cell.textContent);
		const head = screen.getByRole('button', { name: 'Deviation, mm' });
		fireEvent.click(head);
		expect(names()).toEqual(['a', 'b', 'none']);
		expect(screen.getByRole('columnheader', { name: 'Deviation, mm' }).getAttribute('aria-sort')).toBe('ascending');
		fireEvent.click(head);
		expect(names()).toEqual(['b', 'a', 'none']);
		fireEvent.click(head);
		expect(names()).toEqual(['b', 'none', 'a']);
	});

	it('draws a window of 5 000 rows and says how many there are', () => {
		render(<Harness rows={rowsOf(5000)} scrollClass="max-h-96" />);
		expect(document.querySelectorAll('tbody tr[data-line]').length).toBeLessThan(60);
		expect(screen.getByRole('table').getAttribute('aria-rowcount')).toBe('5001');
	});
});

describe('the window', () => {
	it('keeps the whole height whatever is drawn, with heads of another height between', () => {
		const heights = Array.from({ length: 200 }, (_, index) => (index % 9 === 0 ? 46 : 44));
		fc.assert(
			fc.property(fc.uniqueArray(fc.nat(199), { maxLength: 40 }), (drawn) => {
				const indices = [...drawn].sort((a, b) => a - b);
				const parts = windowParts(indices, lineOffsets(heights));
				const height = parts.reduce((sum, part) => sum + (part.kind === 'space' ? part.heightPx : heights[part.index]!), 0);
				expect(height).toBe(heights.reduce((sum, one) => sum + one, 0));
				expect(parts.flatMap((part) => (part.kind === 'line' ? [part.index] : []))).toEqual(indices);
			}),
		);
	});

	it('sorts like a plain stable sort', () => {
		fc.assert(
			fc.property(fc.array(fc.option(fc.integer({ min: -5, max: 5 }))), fc.boolean(), (values, isDescending) => {
				const rows = values.map((value, place) => ({ value, place }));
				const sorted = sortedRows(rows, (row) => row.value, isDescending);
				const known = rows.filter((row) => row.value !== null).sort((a, b) => (isDescending ? b.value! - a.value! : a.value! - b.value!));
				expect(sorted).toEqual([...known, ...rows.filter((row) => row.value === null)]);
			}),
		);
	});
});
