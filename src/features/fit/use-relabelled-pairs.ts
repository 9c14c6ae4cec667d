import { useQuery } from '@tanstack/react-query';
import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import { api } from '#src/lib/api.ts';

/** The pairs once targets are taken for marks they are not named like; those before stay until they are there. */
export function useRelabelledPairs(siteId: string, named: PairsOfSetup, relabellings: readonly Relabelling[]): PairsOfSetup {
	const { setupId, controlSetId } = named;
	const { data } = useQuery({
		...api.fit.pairs.queryOptions({ input: { siteId, setupId, controlSetId, relabellings: [...relabellings] } }),
		enabled: relabellings.length > 0,
		placeholderData: (before) => before ?? named,
	});
	return relabellings.length === 0 ? named : (data ?? named);
}
