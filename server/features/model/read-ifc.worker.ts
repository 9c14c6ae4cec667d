import { closeSync, openSync, readFileSync, statSync, writeSync } from 'node:fs';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { nameElements } from '#shared/model/model-elements.ts';
import type { Checkpoint } from '#shared/model/model-schema.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';
import type { ReadIfcReply, ReadIfcRequest } from './ifc-messages.ts';
import { BrokenEngine, readElements } from './ifc-reading.ts';

/**
 * A program of its own, started with an IPC channel for one file: a hostile file ends this process and not the server. Reads one
 * request, answers with progress, then with a result or a refusal, and ends. It prints nothing. It ends when its parent goes.
 */

const PIECE = 5000;

/** Node's own limit for reading a file whole is 2 GiB; the engine's memory is 4 GiB. */
const MOST_BYTES = 2 ** 31 - 1;

function send(reply: ReadIfcReply): Promise<void> {
	return new Promise((resolve, reject) => {
		if (!process.send) reject(new Error('There is no parent to answer to.'));
		else process.send(reply, (error: Error | null) => (error ? reject(error) : resolve()));
	});
}

async function read(request: ReadIfcRequest): Promise<void> {
	let lastTold = 0;
	const tell = (doing: string, done: number, of: number): void => {
		const now = performance.now();
		if (now - lastTold < 100 && done < of) return;
		lastTold = now;
		process.send?.({ kind: 'progress', doing, done, of } satisfies ReadIfcReply);
	};
	tell('Reading the file', 0, 1);
	if (statSync(request.path).size > MOST_BYTES)
		return send({
			kind: 'refused',
			code: 'too-large',
			message: 'The file is larger than 2 GB. Split the model by building or discipline.',
		});
	const bytes = new Uint8Array(readFileSync(request.path));
	const opened = readModelHead(bytes, request.choices);
	if (!opened.ok) return send({ kind: 'refused', ...opened.refusal });
	const { head } = opened;
	lastTold = 0;
	tell('Opening the model', 0, 1);
	// Only now: a file that is refused above costs no engine.
	const [{ openGeometry }, { pictureBuilder }] = await Promise.all([import('./ifc-geometry.ts'), import('./glb-picture.ts')]);
	const geometry = await openGeometry(bytesForEngine(bytes, head.file, head.schema), head.reading.metresPerUnit);
	if (!geometry)
		return send({
			kind: 'refused',
			code: 'not-ifc',
			message: `The geometry engine cannot open the file, though its ${head.file.entityCount} statements can be read. Export it again from the program that wrote it.`,
		});
	if (geometry.elements.length === 0)
		return send({
			kind: 'refused',
			code: 'no-elements',
			message: `The file can be read (${head.schema.written}, ${head.file.entityCount} entities), but holds no building elements. Export the model with its elements.`,
		});

	const picture = pictureBuilder();
	const at = openSync(request.atPath, 'w');
	const current = new Float64Array(1);
	const currentBytes = new Uint8Array(current.buffer);
	const elements = readElements(
		head,
		geometry,
		picture,
		new Map(request.leaveOut.map(({ entityNumber, why }) => [entityNumber, why])),
		(entityNumber, done, of) => {
			current[0] = entityNumber;
			writeSync(at, currentBytes, 0, 8, 0);
			tell('Working out shapes', done, of);
		},
		request.choices,
	);
	closeSync(at);
	lastTold = 0;
	tell('Drawing the picture', 0, 1);
	// First the picture, whose memory is then free, then the names.
	const hasPicture = await picture.write(request.glbPath);
	const named = nameElements(elements.drafts, head.reading.grid, request.choices.placing.kinds);
	for (let from = 0; from < named.elements.length; from += PIECE)
		await send({ kind: 'elements', elements: named.elements.slice(from, from + PIECE) });
	let piece: Checkpoint[] = [];
	for (const checkpoint of named.checkpoints) {
		if (piece.push(checkpoint) < PIECE) continue;
		await send({ kind: 'checkpoints', checkpoints: piece });
		piece = [];
	}
	if (piece.length > 0) await send({ kind: 'checkpoints', checkpoints: piece });
	await send({
		kind: 'result',
		reading: {
			...head.reading,
			skipped: elements.skipped,
			findings: [...head.findings, ...elements.findings],
			choices: request.choices,
		},
		glbPath: request.glbPath,
		hasPicture,
	});
}

process.on('disconnect', () => process.exit(1));
process.once('message', (request: ReadIfcRequest) => {
	read(request)
		.catch((error: unknown) =>
			error instanceof BrokenEngine ? send({ kind: 'broken-by', entityNumber: error.entityNumber }) : Promise.reject(error),
		)
		.then(
			() => process.exit(0),
			// Told by the exit: the parent says "crashed" and keeps what stands on standard error for the log.
			(error: unknown) => {
				process.stderr.write(String(error instanceof Error ? error.stack : error), () => process.exit(70));
			},
		);
});
