/** @vitest-environment jsdom */
import { act, cleanup, render } from '@testing-library/react';
import { createMemoryRouter, RouterProvider } from 'react-router-dom';
import { afterEach, describe, expect, it } from 'vitest';
import { useAddressSet, useAddressState } from '#src/lib/address-state.ts';

afterEach(cleanup);
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
	render(<RouterProvider router={router} />);
	return { seen, search: () => router.state.location.search, back: () => act(() => router.navigate(-1)) };
}

describe('state in the address', () => {
	it('is read from a link and leaves what else is there', () => {
		const { seen, search } = shown('/?at=cp1&keep=1');
		expect(seen.at?.[0]).toBe('cp1');
		act(() => seen.at?.[1]('cp 2/ä'));
		expect(seen.at?.[0]).toBe('cp 2/ä');
		expect(new URLSearchParams(search()).get('keep')).toBe('1');
		act(() => seen.at?.[1](null));
		expect(search()).toBe('?keep=1');
	});

	it('goes back over what was pushed and not over what was replaced', async () => {
		const { seen, back } = shown('/');
		act(() => seen.tab?.[1]('plan'));
		act(() => seen.at?.[1]('cp1'));
		act(() => seen.at?.[1]('cp2'));
		await back();
		expect([seen.tab?.[0], seen.at?.[0]]).toEqual([null, null]);
	});

	it('writes a set only where it is not the usual one, and none as none', () => {
		const { seen, search } = shown('/');
		expect(seen.show?.[0]).toEqual(usual);
		act(() => seen.show?.[1](['close', 'within']));
		expect(search()).toBe('?show=within%2Cclose');
		act(() => seen.show?.[1]([]));
		expect([search(), seen.show?.[0]]).toEqual(['?show=none', []]);
		act(() => seen.show?.[1](['close', 'outside']));
		expect(search()).toBe('');
	});
});
