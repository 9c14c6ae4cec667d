/**
 * The import rules of ARCHITECTURE.md as a test: what each folder may import, no cycles, no dead modules,
 * features apart from each other, a pure `shared/`.
 *
 * What reads the files: dependency-cruiser 17.4 knows the TypeScript compiler up to 6. Beside TypeScript 7 it takes .ts and .tsx only
 * where @swc/core is installed (without: no module read, no fault found, green), and then reads them with its tolerant JavaScript
 * parser; `parser: 'swc'` stops at the first JSX. So the first two tests check what was read, the rest what was found.
 *
 * @vitest-environment node
 */
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { allExtensions, cruise, type ICruiseResult, type IForbiddenRuleType, type IModule } from 'dependency-cruiser';
import { beforeAll, describe, expect, it } from 'vitest';

const ROOT = fileURLToPath(new URL('..', import.meta.url));

/** One word, one folder in each of server/features, src/features and tests. A new noun is a new word here. */
const NOUNS = ['account', 'check', 'control', 'fit', 'flag', 'job', 'mail', 'model', 'pour', 'record', 'site', 'survey', 'tolerance'];

/** Where a program starts. Everything else must be reached from one of these. */
const ENTRIES = /^(server\/(main|worker|cli)\.ts|server\/scripts\/[^/]+\.ts|src\/main\.tsx|.+\.worker\.ts)$/;

/** Built and tested ahead of its first use: path → the issue that will use it. Empty before a release. */
const AHEAD_OF_USE: Record<string, string> = {};

/** What `shared/` may take from npm: no I/O, runs alike in the browser, the server and a worker. */
const PURE_PACKAGES = ['zod', '@orpc/contract', 'ml-matrix', '@noble/curves', '@noble/hashes'];

/** `mayImport` names folders; `$1` is what the first group of `files` matched: the feature's own noun, the page's own folder. */
interface Layer {
	name: string;
	files: string;
	mayImport: string[];
}

const LAYERS: Layer[] = [
	{ name: 'shared', files: '^shared/', mayImport: ['shared'] },

	{ name: 'server/db', files: '^server/db/', mayImport: ['server/db', 'shared'] },
	{ name: 'server/platform', files: '^server/platform/', mayImport: ['server/platform', 'server/db', 'shared'] },
	{
		name: 'server/features',
		files: '^server/features/([^/]+)/',
		mayImport: ['server/features/$1', 'server/platform', 'server/db', 'shared'],
	},
	{
		name: 'server/workflows',
		files: '^server/workflows/',
		mayImport: ['server/workflows', 'server/features', 'server/platform', 'server/db', 'shared'],
	},
	{
		name: 'server/app',
		files: '^server/(app/|scripts/|[^/]+\\.ts$)',
		mayImport: [
			'server/app',
			'server/scripts',
			'server/cli',
			'server/workflows',
			'server/features',
			'server/platform',
			'server/db',
			'shared',
		],
	},
	{ name: 'server/cli', files: '^server/cli/', mayImport: ['server/cli', 'server/features', 'server/platform', 'shared'] },

	{ name: 'src/lib', files: '^src/lib/', mayImport: ['src/lib', 'shared'] },
	{ name: 'src/ui', files: '^src/ui/', mayImport: ['src/ui', 'src/lib', 'shared'] },
	{ name: 'src/features', files: '^src/features/([^/]+)/', mayImport: ['src/features/$1', 'src/ui', 'src/lib', 'shared'] },
	{ name: 'src/pages', files: '^src/pages/([^/]+)/', mayImport: ['src/pages/$1', 'src/features', 'src/ui', 'src/lib', 'shared'] },
	{
		name: 'src/app',
		files: '^src/(app/|[^/]+\\.tsx?$)',
		mayImport: ['src/app', 'src/pages', 'src/features', 'src/ui', 'src/lib', 'shared'],
	},

	{ name: 'e2e', files: '^e2e/', mayImport: ['e2e', 'tests/builders', 'shared'] },
	{ name: 'tests', files: '^tests/', mayImport: ['tests', 'server', 'src', 'shared'] },
];

const TOP_FOLDERS = ['shared', 'server', 'src', 'e2e', 'tests'];
const NPM = '(^|/)node_modules/';

/** A package whose name is, or begins with, one of these. */
const npm = (...names: string[]): string => `${NPM}(${names.join('|')})`;

const RULES: IForbiddenRuleType[] = [
	...LAYERS.map(
		({ name, files, mayImport }): IForbiddenRuleType => ({
			name: `${name} may import only ${mayImport.join(', ')}`,
			severity: 'error',
			from: { path: files },
			to: { path: `^(${TOP_FOLDERS.join('|')})/.+\\.tsx?$`, pathNot: `^(${mayImport.join('|')})/` },
		}),
	),
	{
		name: 'no cycles',
		severity: 'error',
		from: {},
		to: { circular: true },
	},
	{
		name: 'every import resolves',
		severity: 'error',
		from: {},
		to: { couldNotResolve: true, pathNot: '\\?(url|raw|inline|worker)$' },
	},
	{
		name: 'every package is in package.json',
		severity: 'error',
		from: {},
		to: { dependencyTypes: ['npm-no-pkg', 'npm-unknown'] },
	},
	{
		name: `shared is pure: from npm only ${PURE_PACKAGES.join(', ')}`,
		severity: 'error',
		from: { path: '^shared/' },
		to: { path: NPM, pathNot: npm(...PURE_PACKAGES.map((name) => `${name}/`)) },
	},
	{
		name: 'shared and src know nothing of Node',
		severity: 'error',
		from: { path: '^(shared|src)/' },
		to: { dependencyTypes: ['core'] },
	},
	{
		name: 'no server package in the browser',
		severity: 'error',
		from: { path: '^src/' },
		to: { path: npm('express/', 'drizzle-orm/', '@electric-sql/', 'pg/', 'nodemailer/', '@orpc/server/') },
	},
	{
		name: 'no browser package on the server',
		severity: 'error',
		from: { path: '^server/' },
		to: { path: npm('react/', 'react-dom/', 'react-router/', 'three/', '@react-three/', '@tanstack/') },
	},
	{
		name: 'express stays in server/app and server/platform',
		severity: 'error',
		from: { path: '^server/', pathNot: '^server/(app|platform)/' },
		to: { path: npm('express/') },
	},
];

function sourceFilesOnDisk(): string[] {
	return TOP_FOLDERS.filter((folder) => existsSync(`${ROOT}/${folder}`))
		.flatMap((folder) =>
			readdirSync(`${ROOT}/${folder}`, { recursive: true, encoding: 'utf8' }).map((file) => `${folder}/${file.replaceAll('\\', '/')}`),
		)
		.filter((file) => /\.tsx?$/.test(file) && !file.endsWith('.d.ts'))
		.sort();
}

/** Blanks out comments, well enough for the two text checks below; strings that hold `//` after a colon are left alone. */
function code(file: string): string {
	return readFileSync(`${ROOT}/${file}`, 'utf8')
		.replace(/\/\*[\s\S]*?\*\//g, '')
		.replace(/(^|[^:'"`])\/\/.*$/gm, '$1');
}

describe('architecture', () => {
	const onDisk = sourceFilesOnDisk();
	let modules: Map<string, IModule>;
	let result: ICruiseResult;

	beforeAll(async () => {
		const { output } = await cruise(
			TOP_FOLDERS.filter((folder) => existsSync(`${ROOT}/${folder}`)),
			{
				baseDir: ROOT,
				validate: true,
				ruleSet: { forbidden: RULES },
				doNotFollow: { path: NPM },
				enhancedResolveOptions: { exportsFields: ['exports'], conditionNames: ['import', 'module', 'browser', 'node', 'default'] },
			},
		);
		result = output as ICruiseResult;
		modules = new Map(result.modules.map((module) => [module.source, module]));
	}, 60_000);

	it('reads every source file on disk', () => {
		expect(allExtensions, 'dependency-cruiser reads .tsx only beside @swc/core').toContainEqual({ extension: '.tsx', available: true });
		const read = [...modules.keys()].filter((source) => onDisk.includes(source)).sort();
		expect(onDisk.length).toBeGreaterThan(0);
		expect(read).toEqual(onDisk);
	});

	it('sees every import that the text of a file shows', () => {
		const unseen = onDisk.flatMap((file) => {
			const seen = new Set(modules.get(file)?.dependencies.map((dependency) => dependency.module));
			const written = [...code(file).matchAll(/(?<!['"`.-])\b(?:from|import)\s*\(?\s*['"](?:node:)?([^'"]+)['"]/g)].map(
				(match) => match[1]!,
			);
			return written.filter((specifier) => !seen.has(specifier)).map((specifier) => `${file} → ${specifier}`);
		});
		expect(unseen).toEqual([]);
	});

	it('keeps the import rules', () => {
		const faults = result.summary.violations.map(({ rule, from, to, cycle }) =>
			cycle ? `${rule.name}: ${[from, ...cycle.map((step) => step.name)].join(' → ')}` : `${rule.name}: ${from} → ${to}`,
		);
		expect(faults).toEqual([]);
	});

	it('has every file in a known folder and every feature under a known noun', () => {
		const homeless = onDisk.filter((file) => !LAYERS.some(({ files }) => new RegExp(files).test(file)));
		const features = onDisk.map((file) => /^(?:server|src)\/features\/([^/]+)\//.exec(file)?.[1]).filter((noun) => noun !== undefined);
		expect(homeless).toEqual([]);
		expect([...new Set(features)].filter((noun) => !NOUNS.includes(noun))).toEqual([]);
	});

	it('has no module that no program reaches', () => {
		const reached = new Set<string>();
		const visit = (source: string): void => {
			if (reached.has(source)) return;
			reached.add(source);
			for (const { resolved } of modules.get(source)?.dependencies ?? []) visit(resolved);
		};
		onDisk.filter((file) => ENTRIES.test(file)).forEach(visit);
		const unreached = onDisk.filter((file) => /^(shared|server|src)\//.test(file) && !reached.has(file));
		expect(unreached).toEqual(Object.keys(AHEAD_OF_USE).sort());
	});

	it('starts every worker file from somewhere', () => {
		const workers = onDisk.filter((file) => file.endsWith('.worker.ts'));
		const started = (worker: string): boolean =>
			onDisk.some((file) => file !== worker && code(file).includes(`${worker.split('/').at(-1)}'`));
		expect(workers.filter((worker) => !started(worker))).toEqual([]);
	});

	it('imports a thing from the file that has it, without re-exports', () => {
		const reExport = /\bexport\s+(?:type\s+)?(?:\*|\{[^}]*\})[^;'"\n]*\bfrom\s*['"]/;
		expect(onDisk.filter((file) => reExport.test(code(file)))).toEqual([]);
	});

	it('keeps clocks, chance, the environment and the network out of shared/', () => {
		const impure = /\b(Date\.now\(|new Date\(\)|Math\.random\(|process\.|fetch\(|localStorage|crypto\.randomUUID)/;
		const faults = onDisk.filter((file) => file.startsWith('shared/') && impure.test(code(file)));
		expect(faults).toEqual([]);
	});
});
