import { useQuery } from '@tanstack/react-query';
import { useEffect } from 'react';
import { api } from './api.ts';
import { chooseColourSet, hasColourWish } from './colour-set.ts';
import { chooseReading } from './reading.ts';

/** Lets the pages follow how the person reads, on whatever device; the colours only where this device was given none of its own. */
export function usePreferences(): void {
	const { data } = useQuery(api.account.preferences.queryOptions());
	useEffect(() => {
		if (data === undefined) return;
		chooseReading(data);
		if (!hasColourWish() && data.colourSet !== 'device') chooseColourSet(data.colourSet);
	}, [data]);
}
