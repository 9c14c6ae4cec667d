import { useQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import type { PourSummary } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';

const none: readonly PourSummary[] = [];

/** The pours that hold an element of the check, by planned hour; empty until they are there, so that the figures need not wait. */
export function usePoursOf(check: CheckDetail, siteId: string): readonly PourSummary[] {
	const pours = useQuery(api.pour.list.queryOptions({ input: { siteId } }));
	return useMemo(() => {
		const here = new Set(check.elements.flatMap((element) => element.pourIds));
		return pours.data?.filter((pour) => here.has(pour.pourId)) ?? none;
	}, [check.elements, pours.data]);
}
