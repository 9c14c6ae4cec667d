import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vitest/config';

/** Route tests run on both databases; everything else once. */
const routeTests = ['tests/routes/**/*.test.ts'];

/** Each is a program of its own: the web server, the command line, and what runs in a child process or a thread. */
const serverPrograms = {
	main: 'server/main.ts',
	cli: 'server/cli.ts',
	'read-ifc.worker': 'server/features/model/read-ifc.worker.ts',
	'read-points.worker': 'server/features/survey/read-points.worker.ts',
	'fit-report.worker': 'server/features/fit/fit-report.worker.ts',
	'compute-check.worker': 'server/features/check/compute-check.worker.ts',
	'copy-photo.worker': 'server/features/flag/copy-photo.worker.ts',
	measure: 'server/scripts/measure.ts',
	'add-person': 'server/scripts/add-person.ts',
	'rotate-key': 'server/scripts/rotate-key.ts',
};

export default defineConfig(({ mode }) =>
	mode === 'server'
		? {
				publicDir: false,
				ssr: { external: true },
				build: {
					ssr: true,
					target: 'node20',
					sourcemap: true,
					outDir: 'dist/server',
					emptyOutDir: true,
					rollupOptions: { input: serverPrograms },
				},
			}
		: {
				plugins: [react(), tailwindcss()],
				build: { outDir: 'dist/client', emptyOutDir: true, sourcemap: true, target: 'es2022' },
				test: {
					// Every core: by itself it leaves one free, which on two cores doubles the time.
					maxWorkers: '100%',
					projects: [
						{ test: { name: 'units', include: ['tests/**/*.test.{ts,tsx}'], exclude: routeTests, testTimeout: 30_000 } },
						...['pglite', 'postgres'].map((name) => ({
							test: {
								name,
								include: routeTests,
								globalSetup: 'tests/routes/template.ts',
								testTimeout: 60_000,
								hookTimeout: 60_000,
								env: { TEST_DATABASE: name },
							},
						})),
					],
				},
			},
);
