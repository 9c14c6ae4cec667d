/** @vitest-environment jsdom */
import { act, cleanup, render } from '@testing-library/react';
import { createMemoryRouter, RouterProvider } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { useAddressSet, useAddressState } from '#src/lib/address-state.ts';

beforeEach(() => {
	vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
});
afterEach(() => {
	cleanup();
	vi.useRealTimers();
});
/** Until quick steps have rested and are written. */
const rest = () => act(() => vi.advanceTimersByTime(500));
const verdicts = ['within', 'outside', 'close'] as const;
const usual = ['outside', 'close'] as const;

/** What the page below last saw. */
const seen: {
	at?: ReturnType<typeof useAddressState>;
	tab?: ReturnType<typeof useAddressState>;
	show?: ReturnType<typeof useAddressSet<(typeof verdicts)[number]>>;
} = {};

function Page() {
	seen.at = useAddressState('at');
	seen.tab = useAddressState('tab', 'push');
	seen.show = useAddressSet('show', verdicts, usual);
	return null;
}

function shown(address: string) {
	const router = createMemoryRouter([{ path: '/', element: <Page /> }], { initialEntries: [address] });
	let count = 0;
	let last = router.state.location;
	router.subscribe(({ location }) => {
		if (location !== last) count += 1;
		last = location;
	});
	render(<RouterProvider router={router} />);
	return { search: () => router.state.location.search, writes: () => count, back: () => act(() => router.navigate(-1)) };
}

describe('state in the address', () => {
	it('is read from a link, holds at once, and leaves what else is there', () => {
		const { search } = shown('/?at=cp1&keep=1');
		expect(seen.at?.[0]).toBe('cp1');
		act(() => seen.at?.[1]('cp 2/ä'));
		expect(seen.at?.[0]).toBe('cp 2/ä');
		rest();
		expect(Object.fromEntries(new URLSearchParams(search()))).toEqual({ at: 'cp 2/ä', keep: '1' });
		act(() => seen.at?.[1](null));
		expect(seen.at?.[0]).toBeNull();
		rest();
		expect(search()).toBe('?keep=1');
	});

	it('writes many quick steps once', () => {
		const { search, writes } = shown('/');
		for (let step = 0; step < 300; step += 1) act(() => seen.at?.[1](`cp${step}`));
		expect(seen.at?.[0]).toBe('cp299');
		rest();
		expect([search(), writes()]).toEqual(['?at=cp299', 1]);
	});

	it('loses neither of two values written in one moment', () => {
		const { search } = shown('/');
		act(() => {
			seen.tab?.[1]('plan');
			seen.show?.[1](['within']);
			seen.at?.[1]('cp1');
		});
		rest();
		expect(Object.fromEntries(new URLSearchParams(search()))).toEqual({ tab: 'plan', show: 'within', at: 'cp1' });
	});

	it('goes back over what was pushed and not over what was replaced, and shows what the address then says', async () => {
		const { back } = shown('/');
		act(() => seen.tab?.[1]('plan'));
		act(() => seen.at?.[1]('cp1'));
		rest();
		act(() => seen.at?.[1]('cp2'));
		rest();
		expect([seen.tab?.[0], seen.at?.[0]]).toEqual(['plan', 'cp2']);
		await back();
		expect([seen.tab?.[0], seen.at?.[0]]).toEqual([null, null]);
	});

	it('writes a set only where it is not the usual one, and none as none', () => {
		const { search } = shown('/');
		expect(seen.show?.[0]).toEqual(usual);
		act(() => seen.show?.[1](['close', 'within']));
		rest();
		expect(search()).toBe('?show=within%2Cclose');
		act(() => seen.show?.[1]([]));
		expect(seen.show?.[0]).toEqual([]);
		rest();
		expect(search()).toBe('?show=none');
		act(() => seen.show?.[1](['close', 'outside']));
		rest();
		expect(search()).toBe('');
	});
});
