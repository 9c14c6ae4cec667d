import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import type { Person } from '#shared/account/person.ts';
import { mayWith, type SitePermission } from '#shared/permissions.ts';
import { api } from './api.ts';

/** Who is signed in. Only below the gate that sends others to the sign-in page; throws elsewhere. */
export function useMe(): Person {
	const { data: me } = useSuspenseQuery(api.account.me.queryOptions());
	if (me === null) throw new Error('useMe stands outside of the sign-in gate');
	return me;
}

/** The site of the address, with its line. Suspends; the site layout has asked for it already. */
export function useSite() {
	const siteId = useAddressId('siteId');
	return useSuspenseQuery(api.site.get.queryOptions({ input: { siteId } })).data;
}

/** Whether one of the person's roles on this site allows it: what the server would refuse is hidden, or says why it cannot act. */
export function useMay(permission: SitePermission): boolean {
	return mayWith(useSite().roles, permission);
}

/** A part of the address by its name in the router: "siteId", "checkId". Empty where the address has none. */
export function useAddressId(name: string): string {
	return useParams()[name] ?? '';
}
