import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Element, ModelReading } from '#shared/model/model-schema.ts';
import { writeFieldCsv } from '#shared/model/write-field-csv.ts';
import { readIfcInChild } from '../features/model/read-ifc-in-child.ts';

type Answer = { exitCode: number; output: unknown };

type Asked = { path: string; classes: Set<string> | null; storey: string | null; tag: string | null; isCsv: boolean };

const refused = (code: string, message: string, where?: string): Answer => ({
	exitCode: 2,
	output: { error: { code, message, ...(where === undefined ? {} : { where }) } },
});

function readArguments(args: readonly string[]): Asked | Answer {
	const asked: Asked = { path: '', classes: null, storey: null, tag: null, isCsv: false };
	for (let at = 0; at < args.length; at++) {
		const arg = args[at]!;
		if (arg === '--csv') asked.isCsv = true;
		else if (arg === '--class' || arg === '--storey' || arg === '--tag') {
			const value = args[++at];
			if (value === undefined || value === '') return refused('bad-input', `${arg} needs a value.`, arg);
			if (arg === '--class') asked.classes = new Set(value.split(',').map((name) => name.trim().toLowerCase()));
			else asked[arg === '--storey' ? 'storey' : 'tag'] = value;
		} else if (arg.startsWith('-') && arg !== '-')
			return refused('bad-input', `There is no option ${arg}. Known: --class, --storey, --tag, --csv.`, arg);
		else if (asked.path === '') asked.path = arg;
		else return refused('bad-input', `One model at a time: ${arg} is one too many.`, arg);
	}
	return asked.path === '' ? refused('bad-input', 'Name the model: checkpoints MODEL.ifc') : asked;
}

/** SHA-256 of a file's bytes, hexadecimal. */
export async function fileSha256(path: string): Promise<string> {
	const hash = createHash('sha256');
	for await (const piece of createReadStream(path)) hash.update(piece as Buffer);
	return hash.digest('hex');
}

/** Reads a model for the command line: in a child process, limits generous, the picture thrown away. */
export async function readModelFile(
	path: string,
	note: (text: string) => void,
): Promise<{ ok: true; reading: ModelReading; sha256: string } | { ok: false; code: string; message: string }> {
	const found = await stat(path).catch(() => null);
	if (!found?.isFile()) return { ok: false, code: 'no-such-file', message: `There is no file ${path}.` };
	const folder = await mkdtemp(join(tmpdir(), 'batterboard-'));
	try {
		let told = '';
		const outcome = await readIfcInChild({
			path,
			glbPath: join(folder, 'picture.glb'),
			timeMs: 600_000,
			memoryMb: 3072,
			onProgress: ({ doing, done, of }) => {
				if (doing !== told) note(`${doing} …${of > 1 ? ` (${done} of ${of})` : ''}`);
				told = doing;
			},
		});
		if (!outcome.ok) return { ok: false, code: outcome.code, message: outcome.message };
		return { ok: true, reading: outcome.reading, sha256: await fileSha256(path) };
	} finally {
		await rm(folder, { recursive: true, force: true });
	}
}

/**
 * The command line's `checkpoints`: arguments in, exit code and output out (0 done, 2 the input is refused, 1 a defect). With `--csv` the
 * output is text to print as it stands, else an object to print as JSON. `note` gets progress for standard error. Design frame, metres.
 */
export async function runCheckpoints(args: readonly string[], note: (text: string) => void = () => {}): Promise<Answer> {
	const asked = readArguments(args);
	if ('exitCode' in asked) return asked;
	const read = await readModelFile(asked.path, note);
	if (!read.ok) return refused(read.code, read.message, asked.path);
	const { reading, sha256 } = read;
	const isAsked = (element: Pick<Element, 'class' | 'storey' | 'tag'>): boolean =>
		(asked.classes === null || asked.classes.has(element.class.toLowerCase())) &&
		(asked.storey === null || element.storey === asked.storey) &&
		(asked.tag === null || element.tag === asked.tag);
	const elements = reading.elements.filter(isAsked);
	const numbers = new Set(elements.map(({ entityNumber }) => entityNumber));
	const checkpoints = reading.checkpoints.filter(({ entityNumber }) => numbers.has(entityNumber));
	for (const finding of reading.findings) note(`${finding.code}: ${finding.message}`);
	if (asked.isCsv) return { exitCode: 0, output: writeFieldCsv(checkpoints) };
	const { schema, unit, metresPerUnit, project, mapConversion, storeys, findings } = reading;
	return {
		exitCode: 0,
		output: {
			model: { schema, unit, metresPerUnit, project, mapConversion, storeys, sha256 },
			elements: elements.map(({ globalId, class: className, name, tag, storey, mark, title }) => ({
				globalId,
				class: className,
				name,
				tag,
				storey,
				mark,
				title,
			})),
			checkpoints: checkpoints.map(({ id, globalId, mark, characteristic, place, direction, label, surface, isSoffit }) => ({
				id,
				globalId,
				mark,
				characteristic,
				place,
				direction,
				label,
				surface,
				isSoffit,
			})),
			skipped: reading.skipped
				.filter(({ entityNumber }) => numbers.has(entityNumber))
				.map(({ globalId, class: className, why }) => ({ globalId, class: className, why })),
			findings,
		},
	};
}
