import { defineConfig } from 'vitest/config';
import { dropFilters } from './drop-filters.ts';

/** `npx vitest run -c tests/mutation/vitest.config.ts`: leaves out each site filter in turn, and says which of them no route's answer missed. */
export default defineConfig({
	plugins: [dropFilters()],
	test: {
		include: ['tests/mutation/*.mutation.ts'],
		globalSetup: 'tests/routes/template.ts',
		env: { TEST_DATABASE: 'pglite' },
		name: 'pglite',
		testTimeout: 1_800_000,
		hookTimeout: 300_000,
	},
});
