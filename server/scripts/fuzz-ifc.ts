import { type ChildProcess, spawn } from 'node:child_process';
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { parseArgs } from 'node:util';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { refOf } from '#shared/model/part21-value.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';
import { readIfcInChild } from '../features/model/read-ifc-in-child.ts';
import { mutateIfc } from './mutate-ifc.ts';

/**
 * Damages real files in seeded ways and reads each: every one must end in a result or a clear refusal within its limit.
 * `npx tsx server/scripts/fuzz-ifc.ts [--count 10000] [--from 0] [--seed 1] [--files FOLDER]… [--keep FOLDER] [--own]`
 * One process reads file after file. Where the engine breaks or hangs on an element, the file is read again without it, as the product
 * does; one in thirty of those also goes through the product's own child process with its limits. `--own`: only our own code, without the
 * engine, in this process. `--keep`: where files with a fault are put. Number N of a seed is the same file at every run.
 */

export type FuzzRequest = { bytes: Uint8Array; leaveOut: number[]; hasPicture: boolean };
export type FuzzAnswer =
	| { kind: 'result'; elements: number; checkpoints: number; skipped: number; findings: string[]; faults: string[]; headMs: number }
	| { kind: 'refused'; code: string; message: string; headMs: number }
	/** The engine broke on an element; the next reading has an engine of its own. */
	| { kind: 'broken'; entityNumber: number }
	/** Our own code threw: a fault. */
	| { kind: 'thrown'; text: string };

type Ended = FuzzAnswer | { kind: 'hangs'; where: number } | { kind: 'died'; where: number };

const { values } = parseArgs({
	options: {
		count: { type: 'string', default: '10000' },
		from: { type: 'string', default: '0' },
		seed: { type: 'string', default: '1' },
		files: { type: 'string', multiple: true, default: ['fixtures/ifc', 'fixtures/ifc/hostile'] },
		keep: { type: 'string' },
		own: { type: 'boolean', default: false },
		'most-kb': { type: 'string', default: '120' },
	},
});

/** For one file in the long-lived process, processor time; the start of a process comes on top. And what the product's own child may take. */
const HANG_MS = 1500;
const START_MS = 5000;
/** As in the product. */
const MOST_HANGS = 2;
const MOST_BREAKS = 8;
const limits = { timeMs: 120_000, memoryMb: 1024, elementTimeMs: 2000 };
/** Each reading makes an engine of its own, whose memory comes back only when it is collected. */
const READINGS_A_PROCESS = 400;

/** They hang or break the engine, or are refused, whatever else is done to them. */
const HOPELESS = /^(boolean|cyclic|deep|pdf|zip|garbage|utf16|truncated|long)/;

const folder = mkdtempSync(join(tmpdir(), 'fuzz-ifc-'));
const atPath = join(folder, 'at');
const sources = values.files
	.flatMap((from) => readdirSync(from).map((name) => join(from, name)))
	.filter(
		(path) =>
			path.endsWith('.ifc') &&
			!HOPELESS.test(basename(path)) &&
			statSync(path).size > 1000 &&
			statSync(path).size < Number(values['most-kb']) * 1024,
	)
	.map((path) => ({ name: basename(path), bytes: new Uint8Array(readFileSync(path)) }));

let child: ChildProcess | null = null;
let readings = 0;

async function endChild(): Promise<void> {
	const ending = child;
	child = null;
	readings = 0;
	if (!ending || ending.exitCode !== null || ending.signalCode !== null) return;
	await new Promise((resolve) => {
		ending.once('close', resolve);
		ending.kill('SIGKILL');
	});
}

/** Processor time a process has used, ms (proc(5), fields 14 and 15): the machine may be busy with other things. */
function processorMs({ pid }: ChildProcess): number {
	try {
		const fields = readFileSync(`/proc/${pid}/stat`, 'latin1').split(') ').at(-1)!.split(' ');
		return (Number(fields[11]) + Number(fields[12])) * 10;
	} catch {
		// It has ended: told by its close.
		return 0;
	}
}

function whereItIs(): number {
	const bytes = readFileSync(atPath);
	return bytes.length === 8 ? bytes.readDoubleLE(0) : 0;
}

function readOnce(request: FuzzRequest): Promise<Ended> {
	if (!child) writeFileSync(atPath, '');
	child ??= spawn(
		process.execPath,
		[
			'--max-old-space-size=600',
			'--import',
			pathToFileURL(createRequire(import.meta.url).resolve('tsx')).href,
			fileURLToPath(new URL('./fuzz-ifc.worker.ts', import.meta.url)),
			atPath,
			join(folder, 'picture.glb'),
		],
		{ stdio: ['ignore', 'inherit', 'inherit', 'ipc'], serialization: 'advanced' },
	);
	const running = child;
	const patienceMs = readings++ === 0 ? HANG_MS + START_MS : HANG_MS;
	const sinceMs = processorMs(running);
	return new Promise((resolve) => {
		const settle = (ended: Ended): void => {
			clearInterval(watch);
			running.removeAllListeners();
			resolve(ended);
		};
		const watch = setInterval(() => {
			if (processorMs(running) - sinceMs > patienceMs) settle({ kind: 'hangs', where: whereItIs() });
		}, 100);
		running.on('message', (answer: FuzzAnswer) => settle(answer));
		running.on('close', () => settle({ kind: 'died', where: whereItIs() }));
		running.send(request);
	});
}

const tally = new Map<string, number>();
const count = (key: string): void => {
	tally.set(key, (tally.get(key) ?? 0) + 1);
};
let slowestHeadMs = 0;
let slowestChildMs = 0;
let leftOut = 0;

function fault(index: number, how: string, source: string, bytes: Uint8Array, text: string): void {
	count('FAULT');
	console.log(`#${index} ${source} (${how}): ${text}`);
	if (values.keep === undefined) return;
	mkdirSync(values.keep, { recursive: true });
	writeFileSync(join(values.keep, `${values.seed}-${index}.ifc`), bytes);
}

/** Through the product's own child, with all its limits. */
async function readProperly(bytes: Uint8Array, why: string): Promise<string | null> {
	const path = join(folder, 'damaged.ifc');
	writeFileSync(path, bytes);
	const from = performance.now();
	const outcome = await readIfcInChild({ path, glbPath: join(folder, 'proper.glb'), ...limits });
	const ms = performance.now() - from;
	slowestChildMs = Math.max(slowestChildMs, ms);
	const left = outcome.ok ? outcome.reading.skipped.filter(({ why: reason }) => reason.endsWith('it was left out')).length : 0;
	count(`${why}: ${outcome.ok ? `result (${left} left out)` : `refused: ${outcome.code}`}`);
	if (ms > limits.timeMs + 5000) return `took ${Math.round(ms)} ms, over its limit`;
	if (!outcome.ok && outcome.code === 'crashed' && outcome.detail !== undefined) return `crashed: ${outcome.detail.slice(-600)}`;
	return null;
}

type Read = { ended: Ended; hangs: number; breaks: number };

/** Reads a file again and again without what breaks or hangs the engine. */
async function readWithout(bytes: Uint8Array, hasPicture: boolean): Promise<Read> {
	const leaveOut: number[] = [];
	let [hangs, breaks] = [0, 0];
	for (;;) {
		if (readings >= READINGS_A_PROCESS) await endChild();
		const ended = await readOnce({ bytes, leaveOut, hasPicture });
		if (ended.kind !== 'broken' && ended.kind !== 'result' && ended.kind !== 'refused') await endChild();
		const at = ended.kind === 'broken' ? ended.entityNumber : ended.kind === 'hangs' || ended.kind === 'died' ? ended.where : 0;
		if (at <= 0 || leaveOut.includes(at)) return { ended, hangs, breaks };
		if (ended.kind === 'hangs') hangs++;
		else breaks++;
		if (hangs > MOST_HANGS || breaks > MOST_BREAKS)
			return { ended: { kind: 'refused', code: 'too many elements break or hang', message: '', headMs: 0 }, hangs, breaks };
		leaveOut.push(at);
	}
}

/** Our own code alone: the head, every entity, every placement and storey. */
function readHead(bytes: Uint8Array): Ended {
	const from = performance.now();
	try {
		const opened = readModelHead(bytes);
		if (!opened.ok) return { kind: 'refused', ...opened.refusal, headMs: performance.now() - from };
		const { file, structure, placementOf, findings, schema } = opened.head;
		const faults: string[] = [];
		for (const type of file.typeCounts().keys()) {
			for (const number of file.ofType(type)) {
				const entity = file.entity(number);
				if (!entity) faults.push(`#${number} is lost`);
				structure.storeyOf(number);
				placementOf(refOf(entity?.args[5]));
			}
		}
		bytesForEngine(bytes, file, schema);
		return {
			kind: 'result',
			elements: 0,
			checkpoints: 0,
			skipped: 0,
			findings: findings.map(({ code }) => code),
			faults,
			headMs: performance.now() - from,
		};
	} catch (error) {
		return { kind: 'thrown', text: String(error instanceof Error ? error.stack : error) };
	}
}

const startedMs = performance.now();
const first = Number(values.from);
let odd = 0;
for (let index = first; index < first + Number(values.count); index++) {
	const random = seededRandom(Number(values.seed) * 1_000_003 + index);
	// Neighbouring seeds begin alike.
	for (let i = 0; i < 4; i++) random();
	const source = sources[Math.floor(random() * sources.length)]!;
	const { bytes, how } = mutateIfc(random, source.bytes);
	const { ended, hangs, breaks } = values.own
		? { ended: readHead(bytes), hangs: 0, breaks: 0 }
		: await readWithout(bytes, index % 10 === 0);
	const before = `${hangs > 0 ? 'hung, then ' : ''}${breaks > 0 ? 'broke, then ' : ''}`;
	leftOut += hangs + breaks;
	if (ended.kind === 'result') {
		count(`${before}result${ended.skipped > 0 ? ', some skipped' : ''}`);
		for (const text of ended.faults) fault(index, how, source.name, bytes, text);
	} else if (ended.kind === 'refused') count(`${before}refused: ${ended.code}`);
	else if (ended.kind === 'thrown') fault(index, how, source.name, bytes, ended.text);
	else count(`${before}${ended.kind} at ${'where' in ended ? ended.where : 'an element'}`);
	const isOdd = before !== '' || (ended.kind !== 'result' && ended.kind !== 'refused');
	if (!values.own && isOdd && (odd++ % 30 === 0 || before === '')) {
		const wrong = await readProperly(bytes, 'also by the product');
		if (wrong) fault(index, how, source.name, bytes, wrong);
	}
	if ('headMs' in ended) slowestHeadMs = Math.max(slowestHeadMs, ended.headMs);
	if ((index - first) % 100 === 99)
		console.error(
			`${index - first + 1} read, ${Math.round((performance.now() - startedMs) / 1000)} s ${JSON.stringify(Object.fromEntries(tally))}`,
		);
}
await endChild();
rmSync(folder, { recursive: true, force: true });
console.log(
	`${values.count} damaged files of ${sources.length} sources, seed ${values.seed}, ${Math.round((performance.now() - startedMs) / 1000)} s`,
);
for (const [key, times] of [...tally].sort((a, b) => b[1] - a[1])) console.log(`${String(times).padStart(6)}  ${key}`);
console.log(`elements left out after breaking or hanging the engine: ${leftOut}`);
console.log(`slowest head ${Math.round(slowestHeadMs)} ms, slowest reading with limits ${Math.round(slowestChildMs)} ms`);
