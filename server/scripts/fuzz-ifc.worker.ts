import { openSync, writeSync } from 'node:fs';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { nameElements } from '#shared/model/model-elements.ts';
import { type Checkpoint, type ModelReading, modelReading } from '#shared/model/model-schema.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';
import { pictureBuilder } from '../features/model/glb-picture.ts';
import { openGeometry } from '../features/model/ifc-geometry.ts';
import { BrokenEngine, readElements } from '../features/model/ifc-reading.ts';
import type { FuzzAnswer, FuzzRequest } from './fuzz-ifc.ts';

/**
 * Reads one damaged file after the other with the reader's own parts, until the engine breaks or hangs: then the parent ends it. What the
 * reader's child does, but for many files in one process. Where it is stands in a small file: element numbers, or a stage below zero.
 */

export const STAGES = { head: -1, open: -2, elements: -3, picture: -4, names: -5, checks: -6 } as const;

const [, , atPath, glbPath] = process.argv;
const at = openSync(atPath!, 'w');
const current = new Float64Array(1);
const currentBytes = new Uint8Array(current.buffer);
function stand(where: number): void {
	current[0] = where;
	writeSync(at, currentBytes, 0, 8, 0);
}

/** What no reading may contain, whatever the file. */
function faultsOf(reading: ModelReading): string[] {
	const faults: string[] = [];
	const parsed = modelReading.safeParse(reading);
	if (!parsed.success) faults.push(`not of its schema at ${parsed.error.issues[0]?.path.join('.')}: ${parsed.error.issues[0]?.message}`);
	const onlyOnce = (name: string, values: readonly string[]): void => {
		if (new Set(values).size !== values.length) faults.push(`${name} not unique`);
	};
	onlyOnce(
		'element marks',
		reading.elements.map(({ mark }) => mark),
	);
	onlyOnce(
		'checkpoint marks',
		reading.checkpoints.map(({ mark }) => mark),
	);
	onlyOnce(
		'checkpoint ids',
		reading.checkpoints.map(({ id }) => id),
	);
	const boxes = new Map(reading.elements.map(({ entityNumber, boxM }) => [entityNumber, boxM]));
	const isBad = ({ mark, place, direction, surface, entityNumber }: Checkpoint): string | null => {
		const box = boxes.get(entityNumber);
		if (mark.length > 16) return `mark ${mark} is too long`;
		// A sixteenth digit: at 100 000 km 10 nm; a millimetre is more than any rounding.
		if (!box || place.some((part, k) => !(part > box.min[k]! - 0.001 && part < box.max[k]! + 0.001))) return `${mark} lies off its element`;
		if (direction && !(Math.abs(Math.hypot(...direction) - 1) < 1e-9)) return `${mark} has no unit normal`;
		if (surface && !(Math.abs(surface[0] * place[0] + surface[1] * place[1] + surface[2] - place[2]) < 0.001))
			return `${mark} lies off its surface`;
		return null;
	};
	const bad = reading.checkpoints.map(isBad).find((fault) => fault !== null);
	if (bad) faults.push(bad);
	const texts = [...reading.findings.map(({ message }) => message), ...reading.skipped.map(({ why }) => why)];
	const odd = texts.find((text) => /NaN|Infinity|undefined|\[object/.test(text) || !/^\S.*\S$/s.test(text));
	if (odd !== undefined) faults.push(`odd words: ${odd.slice(0, 200)}`);
	return faults;
}

async function read({ bytes, leaveOut, hasPicture }: FuzzRequest): Promise<FuzzAnswer> {
	const from = performance.now();
	stand(STAGES.head);
	const opened = readModelHead(bytes);
	const headMs = performance.now() - from;
	if (!opened.ok) return { kind: 'refused', code: opened.refusal.code, message: opened.refusal.message, headMs };
	const { head } = opened;
	stand(STAGES.open);
	const geometry = await openGeometry(bytesForEngine(bytes, head.file, head.schema), head.reading.metresPerUnit);
	if (!geometry) return { kind: 'refused', code: 'not-ifc', message: 'engine', headMs };
	if (geometry.elements.length === 0) return { kind: 'refused', code: 'no-elements', message: '', headMs };
	stand(STAGES.elements);
	const picture = pictureBuilder();
	const { drafts, skipped, findings } = readElements(
		head,
		geometry,
		picture,
		new Map(leaveOut.map((number) => [number, 'left out'])),
		(entityNumber) => {
			stand(entityNumber === 0 ? STAGES.elements : entityNumber);
		},
	);
	stand(STAGES.picture);
	if (hasPicture) await picture.write(glbPath!);
	stand(STAGES.names);
	const named = nameElements(drafts, head.reading.grid);
	const reading: ModelReading = {
		...head.reading,
		elements: named.elements,
		checkpoints: [...named.checkpoints],
		skipped,
		findings: [...head.findings, ...findings],
	};
	stand(STAGES.checks);
	return {
		kind: 'result',
		elements: reading.elements.length,
		checkpoints: reading.checkpoints.length,
		skipped: skipped.length,
		findings: [...new Set(reading.findings.map(({ code }) => code))],
		faults: faultsOf(reading),
		headMs,
	};
}

process.on('disconnect', () => process.exit(1));
process.on('message', (request: FuzzRequest) => {
	read(request).then(
		(answer) => process.send?.(answer),
		(error: unknown) =>
			process.send?.(
				(error instanceof BrokenEngine
					? { kind: 'broken', entityNumber: error.entityNumber }
					: { kind: 'thrown', text: String(error instanceof Error ? error.stack : error).slice(0, 1500) }) satisfies FuzzAnswer,
			),
	);
});
