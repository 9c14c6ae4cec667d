import { createORPCClient } from '@orpc/client';
import { RPCLink } from '@orpc/client/fetch';
import type { ContractRouterClient } from '@orpc/contract';
import { createTanstackQueryUtils } from '@orpc/tanstack-query';
import type { contract } from '#shared/contract.ts';

/** Types only come from the contract: its schemas stay out of the first load. */
export type Client = ContractRouterClient<typeof contract>;

const link = new RPCLink({ url: () => new URL('/rpc', window.location.origin) });

/** Calls outside of a query, e.g. `await client.check.csv({ siteId, checkId })`. */
export const client: Client = createORPCClient(link);

/** Queries and mutations: `useSuspenseQuery(api.check.get.queryOptions({ input }))`, `useMutation(api.fit.make.mutationOptions())`, `api.fit.key()`. */
export const api = createTanstackQueryUtils(client);
