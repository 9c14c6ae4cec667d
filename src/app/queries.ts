import { MutationCache, QueryCache, QueryClient } from '@tanstack/react-query';
import { api } from '#src/lib/api.ts';
import { errorCode } from '#src/lib/api-error.ts';

/**
 * The cache of what the server said. A refusal of the contract is final and not tried again; a broken line is, twice.
 * Where the server no longer knows the session, the person is forgotten here too, and the gate asks to sign in.
 */
export function createQueries(): QueryClient {
	const forgetPerson = (error: unknown) => {
		if (errorCode(error) === 'UNAUTHORIZED') queries.setQueryData(api.account.me.queryKey(), null);
	};
	const queries: QueryClient = new QueryClient({
		queryCache: new QueryCache({ onError: forgetPerson }),
		mutationCache: new MutationCache({ onError: forgetPerson }),
		defaultOptions: {
			queries: {
				// The browser's own word on whether there is a line is not trusted: ask, and say what came back.
				networkMode: 'always',
				staleTime: 15_000,
				retry: (failures, error) => errorCode(error) === null && failures < 2,
				retryDelay: (failures) => 400 * 3 ** failures,
			},
			mutations: { networkMode: 'always' },
		},
	});
	return queries;
}
