// `npm test`: everything that is checked, from a bare clone, ending with one line "N passed, N failed". What is missing is installed first.
// Types, format and lint, and the build count as one test each.
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { build, install, root } from './prepare.mjs';

/** What the tests need of the system, and how to tell that it is there. */
const needed = [
	{ name: 'chromium', isThere: () => isOnPath('chromium') },
	{ name: 'poppler-utils', isThere: () => isOnPath('pdfinfo') },
	{ name: 'openssl', isThere: () => isOnPath('openssl') },
	{ name: 'python3', isThere: () => isOnPath('python3') },
	{ name: 'postgresql', isThere: () => existsSync('/usr/lib/postgresql') },
];
const reports = join(root, '.tmp/reports');

install();
installPackages(needed.filter(({ isThere }) => !isThere()).map(({ name }) => name));
rmSync(reports, { recursive: true, force: true });
mkdirSync(reports, { recursive: true });

const counts = [
	one('types', () => run(['node_modules/typescript/bin/tsc', '-b'])),
	one('format and lint', () => run(['node_modules/@biomejs/biome/bin/biome', 'check', '.'])),
	one('build', build),
	vitest(),
	playwright(),
];
const passed = sum(counts.map((count) => count.passed));
const failed = sum(counts.map((count) => count.failed));
console.log(`${passed} passed, ${failed} failed`);
process.exit(failed === 0 ? 0 : 1);

function one(name, check) {
	const isRight = check();
	console.log(`${isRight ? 'passed' : 'FAILED'}: ${name}`);
	return isRight ? { passed: 1, failed: 0 } : { passed: 0, failed: 1 };
}

function vitest() {
	const file = join(reports, 'vitest.json');
	const isRight = run(['node_modules/vitest/vitest.mjs', 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${file}`]);
	const report = readReport(file);
	if (report === null) return { passed: 0, failed: 1 };
	// A file that could not be loaded has no tests to count; an error outside of all tests has no file.
	const unloaded = report.testResults.filter((result) => result.status === 'failed' && result.assertionResults.length === 0).length;
	return { passed: report.numPassedTests, failed: atLeastOne(report.numFailedTests + unloaded, isRight) };
}

function playwright() {
	const file = join(reports, 'playwright.json');
	const isRight = run(['node_modules/playwright/cli.js', 'test', '-c', 'e2e/playwright.config.ts', '--reporter=line,json'], {
		PLAYWRIGHT_JSON_OUTPUT_NAME: file,
	});
	const report = readReport(file);
	if (report === null) return { passed: 0, failed: 1 };
	return { passed: report.stats.expected, failed: atLeastOne(report.stats.unexpected + report.stats.flaky, isRight) };
}

function atLeastOne(failed, isRight) {
	return isRight ? failed : Math.max(1, failed);
}

function readReport(file) {
	return existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : null;
}

function run([program, ...args], environment = {}) {
	const env = { ...process.env, ...environment };
	return spawnSync(process.execPath, [join(root, program), ...args], { cwd: root, stdio: 'inherit', env }).status === 0;
}

function installPackages(names) {
	if (names.length === 0) return;
	if (!isOnPath('apt-get') || process.getuid?.() !== 0) {
		console.error(`Missing on this system, install it first: ${names.join(', ')}. The tests that need it will fail.`);
		return;
	}
	console.error(`Installing ${names.join(', ')} …`);
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	const waiting = ['-o', 'DPkg::Lock::Timeout=300'];
	spawnSync('apt-get', [...waiting, 'update'], { stdio: ['ignore', 2, 2], env });
	spawnSync('apt-get', [...waiting, 'install', '-y', '--no-install-recommends', ...names], { stdio: ['ignore', 2, 2], env });
}

function isOnPath(name) {
	return (process.env.PATH ?? '').split(':').some((folder) => existsSync(join(folder, name)));
}

function sum(numbers) {
	return numbers.reduce((total, number) => total + number, 0);
}
