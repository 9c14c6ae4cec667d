import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { ModelReading } from '#shared/model/model-schema.ts';
import { readIfcInChild } from '../features/model/read-ifc-in-child.ts';

/**
 * Reads every model of a folder as the server does and prints what came of each, as a table, then why elements got no checkpoint:
 * `npx tsx server/scripts/corpus-checkpoints.ts FOLDER [NAME-PART]`
 */

const [, , from, part = ''] = process.argv;
if (from === undefined) throw new Error('Name the folder of models.');
const folder = mkdtempSync(join(tmpdir(), 'corpus-'));

/** Reasons with figures differ by the figure alone. */
const kindOf = (why: string): string => why.replace(/\d+(\.\d+)?/g, 'n').replace(/class Ifc\w+/, 'such a class');

const reasons = new Map<string, { elements: number; files: Set<string>; classes: Map<string, number> }>();
function note(name: string, reading: ModelReading): void {
	for (const { why, class: className } of reading.skipped) {
		const kind = kindOf(why);
		const known = reasons.get(kind) ?? { elements: 0, files: new Set(), classes: new Map() };
		known.elements++;
		known.files.add(name);
		known.classes.set(className, (known.classes.get(className) ?? 0) + 1);
		reasons.set(kind, known);
	}
}

console.log('| file | elements | with checkpoints | plan | level | face | of them at openings | skipped | findings | s |');
console.log('| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |');
for (const name of readdirSync(from).filter((file) => file.endsWith('.ifc') && file.includes(part))) {
	const startedMs = performance.now();
	const outcome = await readIfcInChild({ path: join(from, name), glbPath: join(folder, 'picture.glb'), timeMs: 600_000, memoryMb: 1536 });
	const seconds = ((performance.now() - startedMs) / 1000).toFixed(1);
	if (!outcome.ok) {
		console.log(`| ${name} | refused: ${outcome.code} | | | | | | | | ${seconds} |`);
		continue;
	}
	const { reading } = outcome;
	note(name, reading);
	const count = (characteristic: string): number =>
		reading.checkpoints.filter((checkpoint) => checkpoint.characteristic === characteristic).length;
	const withSome = new Set(reading.checkpoints.map(({ entityNumber }) => entityNumber)).size;
	const atOpenings = reading.checkpoints.filter(({ label }) => /^(Opening|Recess|Round opening)/.test(label)).length;
	const findings = [...new Set(reading.findings.map(({ code }) => code))].join(', ');
	console.log(
		`| ${name} | ${reading.elements.length} | ${withSome} | ${count('plan')} | ${count('level')} | ${count('face')} | ${atOpenings} | ${reading.skipped.length} | ${findings} | ${seconds} |`,
	);
}
rmSync(folder, { recursive: true, force: true });
console.log('\n| why no checkpoint | elements | files | classes |\n| --- | --- | --- | --- |');
for (const [why, { elements, files, classes }] of [...reasons].sort((a, b) => b[1].elements - a[1].elements)) {
	const most = [...classes].sort((a, b) => b[1] - a[1]).slice(0, 5);
	console.log(
		`| ${why} | ${elements} | ${files.size} | ${most.map(([className, times]) => `${className.slice(3)} ${times}`).join(', ')} |`,
	);
}
