/** @vitest-environment jsdom */
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { act, cleanup, configure, fireEvent, render, screen, waitFor } from '@testing-library/react';
import { createMemoryRouter, RouterProvider } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { PairsOfSetup } from '#shared/fit/contract.ts';
import type { FitPair } from '#shared/fit/fit-schema.ts';
import { shelvedInput } from '#shared/fit/shelved-input.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import type { SetupSummary } from '#shared/survey/contract.ts';
import { FitWorkbench } from '#src/features/fit/fit-workbench.tsx';
import { KeysProvider } from '#src/ui/keys.tsx';

const ids = {
	siteId: '00000000-0000-4000-8000-000000000001',
	setupId: '00000000-0000-4000-8000-000000000002',
	controlSetId: '00000000-0000-4000-8000-000000000003',
};
const setup: SetupSummary = {
	setupId: ids.setupId,
	name: 'S2',
	levelling: 'levelled',
	bringsScale: true,
	pointSigmaM: null,
	commonMm: 2,
	instrumentHeightM: null,
	pointCount: 9,
	targetCount: 8,
	adoptedFitId: null,
};

// A search for causes takes its time on a busy machine.
configure({ asyncUtilTimeout: 20_000 });

// The browser of the tests has no dialogs of its own.
beforeEach(() => {
	HTMLDialogElement.prototype.showModal ??= function showModal(this: HTMLDialogElement) {
		this.open = true;
	};
	HTMLDialogElement.prototype.close ??= function close(this: HTMLDialogElement) {
		this.open = false;
	};
	vi.stubGlobal('fetch', () => new Promise(() => {}));
});
afterEach(() => {
	cleanup();
	vi.unstubAllGlobals();
});

function pairs(count: number, offHeightM = 0): FitPair[] {
	const random = seededRandom(3);
	return Array.from({ length: count }, (_, i) => {
		const place: [number, number, number] = [random() * 60, random() * 40, random() * 6];
		const off = () => (random() - 0.5) * 0.002;
		return {
			name: `T${i + 1}`,
			control: place,
			survey: [place[0] - 7 + off(), place[1] + 3 + off(), place[2] - 1 + off() + (i === 6 ? offHeightM : 0)],
			surveySigma: [0.001, 0.001, 0.001],
			controlSigma: [0.0005, 0.0005, 0.0005],
		};
	});
}

async function show(own: Partial<PairsOfSetup>, mayAdopt = true) {
	const whole: PairsOfSetup = {
		setupId: ids.setupId,
		controlSetId: ids.controlSetId,
		pairs: [],
		controlWithoutTarget: [],
		targetsWithoutControl: [],
		sigmaNote: null,
		...own,
	};
	const element = (
		<KeysProvider>
			<FitWorkbench
				siteId={ids.siteId}
				setup={setup}
				pairs={whole}
				start={null}
				adopted={null}
				grid={[]}
				outline={null}
				mayAdopt={mayAdopt}
			/>
		</KeysProvider>
	);
	const router = createMemoryRouter([{ path: '*', element }]);
	await act(async () => {
		render(
			<QueryClientProvider client={new QueryClient()}>
				<RouterProvider router={router} />
			</QueryClientProvider>,
		);
	});
}

const heading = () => screen.getByRole('heading', { level: 1 }).textContent;

describe('the workbench', () => {
	it('says that nothing checks the fit, holds back by one press the pair it needs least, and takes that back', async () => {
		await show({ pairs: pairs(8) });
		const press = await screen.findByRole('button', { name: /^Hold T\d back$/ });
		const name = press.textContent!.split(' ')[1]!;
		expect(press.closest('section')?.textContent).toMatch(/worst point error over the targets, 2σ, then [\d.]+ → [\d.]+ mm/);
		fireEvent.click(press);
		await waitFor(() => expect(screen.queryByText(/No pair is held back/)).toBeNull());
		expect(screen.getAllByLabelText<HTMLSelectElement>(`Shelf of ${name}`)[0]!.value).toBe('held-back all');
		fireEvent.click(screen.getByRole('button', { name: 'Take back' }));
		await screen.findByRole('button', { name: `Hold ${name} back` });
	});

	it('says where none can be spared', async () => {
		await show({ pairs: pairs(3) });
		await screen.findByText('No pair is held back, and none can be spared');
	});

	it('asks which target is which mark and why before it gives another label', async () => {
		await show({ pairs: pairs(8), controlWithoutTarget: ['T20'], targets: pairs(8).map(({ name }) => name) });
		fireEvent.click(screen.getByRole('button', { name: 'Give a target another label' }));
		const give = screen.getByRole('button', { name: 'Give it this label' });
		fireEvent.change(screen.getByLabelText('Target, as in the file'), { target: { value: 'T3' } });
		fireEvent.change(screen.getByLabelText('Is the mark'), { target: { value: 'T3' } });
		fireEvent.change(screen.getByLabelText('Reason'), { target: { value: 'Read wrongly in the field book.' } });
		fireEvent.click(give);
		await screen.findByText('It is labelled so already.');
		fireEvent.change(screen.getByLabelText('Is the mark'), { target: { value: 'T20' } });
		fireEvent.click(give);
		await waitFor(() => expect(screen.queryByRole('button', { name: 'Give it this label' })).toBeNull());
		// An act among the others: it can be taken back.
		expect(screen.getByRole('button', { name: 'Take back' })).toBeTruthy();
	});

	it('tells the wrong target height, shows before and after, cures by one press and takes it back', async () => {
		await show({ pairs: pairs(8, 0.095) });
		const press = await screen.findByRole('button', { name: 'Use T7 in plan only' });
		expect(heading()).toMatch(/does not fit yet.*T7/);
		const outcome = press.closest('li')?.textContent ?? '';
		expect(outcome).toMatch(/then rms [\d.]+ mm → [\d.]+ mm · variance factor [\d.]+ → [\d.]+ · worst [\d.]+ → [\d.]+ of 3\.3/);
		fireEvent.click(press);
		await waitFor(() => expect(heading()).toMatch(/^Set-up S2 fits: 8 targets agree within/));
		// What was said before the press is what came.
		const said = /→ ([\d.]+) mm/.exec(outcome)?.[1];
		expect(heading()).toContain(`${said} mm`);
		expect(screen.getByText(/^plan only: /)).toBeTruthy();
		fireEvent.click(screen.getByRole('button', { name: 'Take back' }));
		await waitFor(() => expect(heading()).toMatch(/does not fit yet/));
		expect(screen.queryByRole('button', { name: 'Take back' })).toBeNull();
	});

	it('asks a reason before a pair is set aside, and keeps it in sight', async () => {
		await show({ pairs: pairs(6) });
		fireEvent.change(screen.getAllByLabelText('Shelf of T2')[0]!, { target: { value: 'set-aside all' } });
		fireEvent.click(await screen.findByRole('button', { name: 'Mark disturbed' }));
		fireEvent.click(screen.getByRole('button', { name: 'Set T2 aside' }));
		await waitFor(() => expect(screen.getByText('Mark disturbed', { selector: 'td' })).toBeTruthy());
		expect(heading()).toContain('5 targets agree');
	});

	it('says first that the instrument moved, and offers to void what came after to whoever may', async () => {
		const evidence = { lastGoodRow: 9, firstRow: 2, lastRow: 40 };
		const findings = [
			{ code: 'moved-setup', pairs: ['T1'], message: 'T1 came back 12.0 mm off along z: did the instrument move?', evidence },
		];
		await show({ pairs: pairs(6), findings });
		expect(screen.getByRole('heading', { name: /^T1 came back 12\.0 mm off/ })).toBeTruthy();
		fireEvent.click(screen.getByRole('button', { name: 'Void what came after row 9' }));
		expect(await screen.findByDisplayValue('9')).toBeTruthy();
		expect(screen.getByRole('button', { name: 'Void them' })).toBeTruthy();
		cleanup();
		await show({ pairs: pairs(6), findings }, false);
		expect(screen.getByRole('heading', { name: /^T1 came back/ })).toBeTruthy();
		expect(screen.queryByRole('button', { name: /^Void/ })).toBeNull();
	});

	it('lets who may not adopt look only', async () => {
		await show({ pairs: pairs(8, 0.095) }, false);
		await screen.findByText(/T7.*check the target height/, { selector: 'section h2' });
		expect(screen.queryByRole('button', { name: /in plan only/ })).toBeNull();
		expect(screen.queryByLabelText(/^Shelf of/)).toBeNull();
		expect(screen.getByRole('button', { name: 'Adopt this fit' }).getAttribute('aria-disabled')).toBe('true');
	});

	it('proposes the marks of unnamed targets, and picks none where several matches are as good', async () => {
		const square = [
			['1', [0, 0, 0]],
			['2', [10, 0, 0]],
			['3', [10, 10, 0]],
			['4', [0, 10, 0]],
		] as const;
		const named = square.map(([name, point]) => ({ name: `M${name}`, point: [...point] as [number, number, number] }));
		const seen = square.map(([name, [x, y, z]]) => ({ name: `10${name}`, point: [x + 3, y - 2, z] as [number, number, number] }));
		await show({ loose: { targets: seen, control: named } });
		// A square turned by a quarter is the same square: four matches.
		await screen.findByText(/4 matches are equally good.*None is picked/);
		expect(screen.getAllByRole('button', { name: 'Take this match' })).toHaveLength(4);
		cleanup();
		// One corner further out: there is one way to lay them over each other.
		const out = (list: typeof named) =>
			list.map((one, i) => (i === 2 ? { ...one, point: [one.point[0] + 5, one.point[1] + 1, 0] as [number, number, number] } : one));
		await show({ loose: { targets: out(seen), control: out(named) } });
		await screen.findByText(/Distances say which marks these are: 4 of 4 targets match/);
		expect(screen.getByText(/101 is M1, 102 is M2, 103 is M3, 104 is M4/)).toBeTruthy();
	});
});

describe('200 pairs', () => {
	it('have their figures without the search for causes, which is left to a thread', () => {
		const many = pairs(200, 0.05);
		const input = shelvedInput(many, 'levelled', null, []);
		const outcome = computeFit(input, { findings: false });
		expect(outcome).toMatchObject({ ok: true, result: { findings: [] } });
		const searched = computeFit(input);
		if (!outcome.ok || !searched.ok) throw new Error('There is a fit.');
		// The same figures, to the last bit: what is shown at once is what is kept.
		expect({ ...searched.result, findings: [] }).toEqual(outcome.result);
		expect(searched.result.findings.map(({ pairs: named }) => named)).toContainEqual(['T7']);
	});
});
