import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { RouterProvider } from 'react-router-dom';
import { createQueries } from './queries.ts';
import { createRouter } from './router.tsx';

/** The program: what was fetched, and what the address shows. */
export function App() {
	const [queries] = useState(createQueries);
	const [router] = useState(createRouter);
	return (
		<QueryClientProvider client={queries}>
			<RouterProvider router={router} />
		</QueryClientProvider>
	);
}
