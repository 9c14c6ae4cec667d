import { useCallback, useSyncExternalStore } from 'react';

/** Where the layout changes, CSS pixels; the same figures as the breakpoints among the tokens. */
const breakpointsPx = { tablet: 700, cabin: 1024, desk: 1200 } as const;

/** True where the screen is narrower than this: for what CSS alone cannot change, such as the columns of a table. */
export function useIsBelow(breakpoint: keyof typeof breakpointsPx): boolean {
	const question = `(width < ${breakpointsPx[breakpoint]}px)`;
	const subscribe = useCallback(
		(listener: () => void) => {
			const query = window.matchMedia?.(question);
			query?.addEventListener('change', listener);
			return () => query?.removeEventListener('change', listener);
		},
		[question],
	);
	return useSyncExternalStore(subscribe, () => window.matchMedia?.(question).matches ?? false);
}
