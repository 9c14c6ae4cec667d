import { execSync } from 'node:child_process';
import { defineConfig } from 'playwright/test';

/** Debian's browser: the runner's own download is not to be had everywhere. */
const executablePath =
	process.env.CHROMIUM_PATH ?? execSync('command -v chromium || command -v chromium-browser', { encoding: 'utf8' }).trim();

const port = Number(process.env.E2E_PORT ?? 4299);
const dataFolder = '.tmp/e2e-data';

/** Journeys run on the built program with the demo site, one server for all; each file is one person's job. */
export default defineConfig({
	testDir: '.',
	testMatch: '*.e2e.ts',
	outputDir: '../test-results',
	workers: 1,
	timeout: 90_000,
	expect: { timeout: 20_000 },
	reporter: process.env.PLAYWRIGHT_JSON ? [['line'], ['json', { outputFile: process.env.PLAYWRIGHT_JSON }]] : 'line',
	use: {
		baseURL: `http://127.0.0.1:${port}`,
		launchOptions: { executablePath },
		viewport: { width: 1280, height: 960 },
		screenshot: 'only-on-failure',
	},
	webServer: {
		command: `rm -rf ${dataFolder} && exec node --enable-source-maps dist/server/main.js`,
		cwd: '..',
		env: { PORT: String(port), DATA_DIR: dataFolder },
		url: `http://127.0.0.1:${port}/health`,
		timeout: 180_000,
		gracefulShutdown: { signal: 'SIGTERM', timeout: 10_000 },
	},
});
