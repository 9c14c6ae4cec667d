import { useQueryClient } from '@tanstack/react-query';
import type { Person } from '#shared/account/person.ts';
import { api } from '#src/lib/api.ts';

/** Tells the rest of the program who came in. What another person saw on this device is forgotten first. */
export function useCameIn(onSignedIn: () => void): (person: Person) => void {
	const queries = useQueryClient();
	return (person) => {
		queries.clear();
		queries.setQueryData(api.account.me.queryKey(), person);
		onSignedIn();
	};
}
