/** @vitest-environment jsdom */
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { act, cleanup, fireEvent, render, screen, within } from '@testing-library/react';
import { Suspense } from 'react';
import { createMemoryRouter, RouterProvider } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { CheckDetail } from '#shared/check/contract.ts';
import { api } from '#src/lib/api.ts';
import CheckPage from '#src/pages/check/check-page.tsx';
import { KeysProvider } from '#src/ui/keys.tsx';
import { aCheck, aFace, checkId, pourId, siteId } from './a-check.ts';

beforeEach(() => {
	// No server and no graphics: what is not in the cache stays on its way, and the plan takes the model's place.
	vi.stubGlobal('fetch', () => new Promise(() => {}));
	vi.spyOn(HTMLCanvasElement.prototype, 'getContext').mockReturnValue(null);
});
afterEach(() => {
	cleanup();
	vi.unstubAllGlobals();
	vi.restoreAllMocks();
});

async function show(check: CheckDetail, search = '', roles: ('site-engineer' | 'contractor')[] = ['site-engineer']) {
	const queries = new QueryClient({ defaultOptions: { queries: { staleTime: Number.POSITIVE_INFINITY, retry: false } } });
	queries.setQueryData(api.check.get.queryKey({ input: { siteId, checkId } }), check);
	queries.setQueryData(api.site.get.queryKey({ input: { siteId } }), {
		siteId,
		name: 'Site',
		isInvented: true,
		roles,
		timeZone: 'UTC',
		buildings: [],
		companies: [],
		columnOrder: null,
		line: { knots: [], newestCheckId: checkId, isTaut: true },
	});
	queries.setQueryData(api.pour.list.queryKey({ input: { siteId } }), [
		{
			pourId,
			number: '7',
			name: 'Columns',
			companyId: pourId,
			companyName: 'Fennick Forms',
			plannedAt: null,
			elementCount: 3,
			state: 'planned',
			before: 'open',
			after: 'open',
			isHeld: false,
		},
	]);
	const element = (
		<KeysProvider>
			<Suspense fallback="waiting">
				<CheckPage />
			</Suspense>
		</KeysProvider>
	);
	const router = createMemoryRouter(
		[
			{ path: '/sites/:siteId/checks/:checkId', element },
			{ path: '*', element: 'elsewhere' },
		],
		{
			initialEntries: [`/sites/${siteId}/checks/${checkId}${search}`],
		},
	);
	await act(async () => {
		render(
			<QueryClientProvider client={queries}>
				<RouterProvider router={router} />
			</QueryClientProvider>,
		);
	});
	return { address: () => router.state.location.search };
}

const rowNames = () => [...document.querySelectorAll('tbody tr[data-line]')].map((row) => row.querySelector('th')?.textContent);
const headNames = () => screen.getAllByRole('rowheader').filter((cell) => cell.getAttribute('scope') === 'rowgroup');

describe('the check page', () => {
	it('says the consequence, shows what is off with the worst element first, and hides what is within', async () => {
		await show(aCheck());
		expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('2 elements off, 1 point too close to call, 1 not seen');
		expect(headNames().map((cell) => cell.textContent?.split(',')[0])).toEqual(['Column C/2', 'Column B/1', 'Column D/3']);
		expect(rowNames()).toHaveLength(4);
		expect(screen.getByText('trial, not published')).toBeTruthy();
		expect(screen.getByText(/unchecked/)).toBeTruthy();
	});

	it('puts a choice into the address and tells all that is known of it', async () => {
		const { address } = await show(aCheck());
		const row = screen.getByText('outside, by 6').closest('tr');
		await act(async () => fireEvent.click(row as HTMLElement));
		await vi.waitFor(() => expect(address()).toBe('?at=B1-east'));
		const card = await screen.findByRole('region', { name: 'The chosen checkpoint' });
		expect(card.textContent).toContain('East face, 2.8 m above its base: 16 mm proud. Allowed −10 to +10. Known to ±3. Outside, by 6 mm.');
		expect(card.textContent).toContain('±3.0 from fit 0.9 ⊕ point 0.7 ⊕ common 1.0 mm');
		expect(card.textContent).toContain('P1 from set-up S1');
		expect(card.textContent).toContain('E\u00a06.000 N\u00a02.000 H\u00a03.000');
	});

	it('moves the choice along rows by arrow and lets it go by Escape', async () => {
		const { address } = await show(aCheck(), '?at=C2-east');
		const row = document.querySelector('tr[aria-current]') as HTMLElement;
		await act(async () => fireEvent.keyDown(row, { key: 'ArrowDown' }));
		await vi.waitFor(() => expect(address()).toBe('?at=B1-east'));
		await act(async () => fireEvent.keyDown(document.body, { key: 'Escape' }));
		await vi.waitFor(() => expect(address()).toBe(''));
	});

	it('shows a link’s choice even where the filter would hide it', async () => {
		await show(aCheck(), '?at=A0-east&show=proud');
		expect(document.querySelector('tr[aria-current]')?.textContent).toContain('within');
		expect(headNames().map((cell) => cell.textContent?.split(',')[0])).toEqual(['Column B/1', 'Column A/0']);
	});

	it('toggles a verdict by its chip and narrows by pour, storey and mark, all in the address', async () => {
		const { address } = await show(aCheck());
		await act(async () => fireEvent.click(screen.getByRole('button', { name: '2 within' })));
		await vi.waitFor(() => expect(rowNames()).toHaveLength(6));
		await act(async () => fireEvent.click(screen.getByRole('button', { name: '1 shy' })));
		await vi.waitFor(() => expect(address()).toBe('?show=proud%2Cplan%2Cclose%2Cundecided%2Cunmeasured%2Cnorule%2Cwithin'));
		await vi.waitFor(() => expect(rowNames()).toHaveLength(5));
		await act(async () => fireEvent.change(screen.getByLabelText('Pour'), { target: { value: pourId } }));
		await vi.waitFor(() =>
			expect(screen.getByRole('heading', { level: 1 }).textContent).toBe(
				'Pour 7 is not ready: 1 element off, 1 point too close, 1 not seen',
			),
		);
		await act(async () => fireEvent.change(screen.getByLabelText('Find an element by its mark'), { target: { value: 'd3' } }));
		await vi.waitFor(() => expect(rowNames()).toHaveLength(2));
		await act(async () => fireEvent.change(screen.getByLabelText('Find an element by its mark'), { target: { value: 'zz' } }));
		expect(await screen.findByText('Nothing here goes by that name.')).toBeTruthy();
		await act(async () => fireEvent.click(screen.getByRole('button', { name: 'Show the whole check' })));
		await vi.waitFor(() => expect(address()).not.toContain('find'));
	});

	it('draws the plan where there is no 3D, says so, and a press on a glyph chooses it', async () => {
		const { address } = await show(aCheck());
		expect(screen.getByText(/draws no 3D here, so the plan takes the model’s place/)).toBeTruthy();
		const plan = screen.getByRole('img', { name: /checkpoints on the plan/ });
		expect(plan.querySelectorAll('path.glyph-proud')).toHaveLength(1);
		const scale = planScale(aCheck());
		plan.setPointerCapture = () => {};
		const [x, y] = [518 / 2 + (11 - scale.middle[0]) * scale.pxPerM, 396 / 2 - (2 - scale.middle[1]) * scale.pxPerM];
		await act(async () => {
			fireEvent.pointerDown(plan, { pointerId: 1, clientX: x, clientY: y });
			fireEvent.pointerUp(plan, { pointerId: 1, clientX: x, clientY: y });
		});
		await vi.waitFor(() => expect(address()).toBe('?at=C2-east'));
	});

	it('shows everything where all is within, and says that it is', async () => {
		const check = aCheck();
		await show({ ...check, deviations: check.deviations.filter((row) => row.verdict === 'within') });
		expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('All 2 points are within');
		expect(rowNames()).toHaveLength(2);
	});

	it('says why nothing was measured', async () => {
		const check = aCheck();
		await show({
			...check,
			deviations: check.deviations.map((row) => aFace({ checkpointId: row.checkpointId, elementId: row.elementId, deviationMm: null })),
		});
		expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('Nothing measured yet, 6 points not seen');
		expect(screen.getByText(/No point of the survey met a checkpoint/)).toBeTruthy();
	});

	it('names what is no longer the newest, and gives the act only to who may check', async () => {
		const check = aCheck();
		const stale = { ...check, revision: { ...check.revision, isNewest: false } };
		await show(stale);
		expect(screen.getByText(/A newer revision/).textContent).toContain('A newer revision is there; these figures stand on rev 4.');
		expect(screen.getByRole('button', { name: 'Check again' })).toBeTruthy();
		cleanup();
		await show(stale, '', ['contractor']);
		expect(screen.queryByRole('button', { name: 'Check again' })).toBeNull();
	});

	it('folds findings and the points that met nothing into one line', async () => {
		const findings = [{ code: 'common-shift', pairs: [], message: 'All lie 2 mm west.', evidence: {} }];
		await show(aCheck({ findings, unmatchedPoints: [{ name: 'X9', setupId: 'none', reason: 'no checkpoint within 0.3 m' }] }));
		const folded = screen.getByText('2 findings.').closest('details');
		expect(folded?.open).toBe(false);
		expect(within(folded as HTMLElement).getByText('1 point of the survey met no checkpoint.')).toBeTruthy();
	});

	it('says what persons left out, how much, why and who, with findings and without', async () => {
		const leftOut = [
			{ reason: 'Behind the form', by: 'Jo Marsh', count: 3 },
			{ reason: 'Cast against rock', by: 'Ana Reyes', count: 1 },
		];
		await show(aCheck({ findings: [], unmatchedPoints: [], leftOut }));
		expect(screen.getAllByText('4 checkpoints were left out of this check by persons.', { exact: false }).length).toBeGreaterThan(0);
		expect(screen.getByText(': Behind the form (Jo Marsh)', { exact: false }).textContent).toBe('3: Behind the form (Jo Marsh)');
		expect(screen.queryByText('0 findings', { exact: false })).toBeNull();
	});

	it('shows how far the computing is instead of half the figures, and why there is no result', async () => {
		await show(aCheck({ state: 'computing', jobId: checkId, deviations: [], elements: [] }));
		expect(screen.getByRole('heading', { level: 1 }).textContent).toBe('Check 3 is being computed');
		expect(screen.getByRole('button', { name: 'Stop' })).toBeTruthy();
		cleanup();
		await show(aCheck({ state: 'failed', reason: 'Set-up S1 has no adopted fit any more.', deviations: [], elements: [] }));
		expect(screen.getByRole('alert').textContent).toContain('Set-up S1 has no adopted fit any more.');
		expect(screen.getByRole('link', { name: 'Check again' }).getAttribute('href')).toContain('/check?survey=');
	});
});

/** Where the plan puts a place, at the size it has before it is measured: the box of the marks with half a metre, margins 22, 44 more at the top. */
function planScale(check: CheckDetail): { middle: [number, number]; pxPerM: number } {
	const east = check.deviations.map(({ place }) => place[0]);
	const north = check.deviations.map(({ place }) => place[1]);
	const [minE, maxE, minN, maxN] = [Math.min(...east) - 0.5, Math.max(...east) + 0.5, Math.min(...north) - 0.5, Math.max(...north) + 0.5];
	const pxPerM = Math.min((518 - 44) / (maxE - minE), (396 - 88) / (maxN - minN));
	return { middle: [(minE + maxE) / 2, (minN + maxN) / 2 + 22 / pxPerM], pxPerM };
}
