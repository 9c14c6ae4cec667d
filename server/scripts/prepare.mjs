// Makes the checkout ready to run: packages as locked, then client and server built. Compares stamps, so that a second start does neither.
// Imports only what Node brings: it runs before anything is installed. All output on standard error: the command line's standard output is JSON.
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { alone } from './alone.mjs';

/** The checkout. */
export const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..');

const lock = join(root, '.tmp/prepare.lock');
const buildStamp = join(root, 'dist/.bb-src');
/** What goes into the built files. */
const sources = ['shared', 'server', 'src', 'public', 'index.html', 'vite.config.ts', 'package-lock.json'];

const [major, minor] = process.versions.node.split('.').map(Number);
if (major < 20 || (major === 20 && minor < 19)) {
	console.error(`Batterboard needs Node 20.19 or newer; this is ${process.versions.node}.`);
	process.exit(1);
}

/** Installs what the lock file says, where it is not there yet. Exits with a sentence where that fails. */
export function install() {
	if (isInstalled()) return;
	const isDone = alone(lock, () => {
		if (isInstalled()) return true;
		console.error('Installing packages …');
		// Development packages too: they build the client. NODE_ENV=production would leave them out.
		return runNpm(['ci', '--include=dev', '--no-audit', '--no-fund']);
	});
	if (!isDone) stop('The packages could not be installed. See the lines above.');
}

/** npm writes down at the end of an install what it has put there: the same versions as locked need no second install. */
function isInstalled() {
	const written = join(root, 'node_modules/.package-lock.json');
	if (!existsSync(written)) return false;
	const present = JSON.parse(readFileSync(written, 'utf8')).packages;
	const locked = JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')).packages;
	return Object.entries(locked).every(([path, { version, optional, link }]) => {
		if (path === '' || link) return true;
		// Other systems' builds of a package are locked too, and left out here.
		return present[path] === undefined ? optional === true : present[path].version === version;
	});
}

/** Builds client and server, where a source changed since. False where that fails; the lines above say why. */
export function build() {
	const wanted = hashOfSources();
	if (stampOf(buildStamp) === wanted) return true;
	// Two commands started at once on a fresh checkout would write the same files under each other's feet.
	return alone(lock, () => {
		if (stampOf(buildStamp) === wanted) return true;
		console.error('Building …');
		rmSync(buildStamp, { force: true });
		for (const mode of [[], ['--mode', 'server']]) {
			if (!runNode([join(root, 'node_modules/vite/bin/vite.js'), 'build', '--logLevel', 'warn', ...mode])) return false;
		}
		mkdirSync(dirname(buildStamp), { recursive: true });
		writeFileSync(buildStamp, wanted);
		return true;
	});
}

function hashOfSources() {
	const hash = createHash('sha256');
	for (const file of sources.flatMap(filesUnder)) hash.update(`${file}\0`).update(readFileSync(join(root, file)));
	return hash.digest('hex');
}

/** Installed and built, or ended with a sentence. */
export function prepare() {
	install();
	if (!build()) stop('The build failed. See the lines above.');
}

/** Runs a program of ours with Node, its output on standard error. True where it ended well. */
export function runNode(args) {
	return spawnSync(process.execPath, args, { cwd: root, stdio: ['ignore', 2, 2] }).status === 0;
}

function runNpm(args) {
	// Under npm its own program is named; without (as a bin) the one on the path is taken.
	const npm = process.env.npm_execpath;
	if (npm?.endsWith('.js')) return runNode([npm, ...args]);
	const isWindows = process.platform === 'win32';
	return spawnSync(isWindows ? 'npm.cmd' : 'npm', args, { cwd: root, stdio: ['ignore', 2, 2], shell: isWindows }).status === 0;
}

function filesUnder(path) {
	if (!existsSync(join(root, path))) return [];
	const names = /\.[a-z]+$/.test(path) ? null : readdirSync(join(root, path), { recursive: true, withFileTypes: true });
	if (names === null) return [path];
	return names
		.filter((entry) => entry.isFile())
		.map((entry) => join(entry.parentPath, entry.name).slice(root.length + 1))
		.sort();
}

function stampOf(file) {
	return existsSync(file) ? readFileSync(file, 'utf8').trim() : null;
}

function stop(sentence) {
	console.error(sentence);
	process.exit(1);
}
