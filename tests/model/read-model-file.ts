import { readFileSync } from 'node:fs';
import { pictureBuilder } from '#server/features/model/glb-picture.ts';
import { openGeometry } from '#server/features/model/ifc-geometry.ts';
import { readElements } from '#server/features/model/ifc-reading.ts';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { nameElements } from '#shared/model/model-elements.ts';
import type { ModelReading } from '#shared/model/model-schema.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';

/** Reads a model that is known to be harmless in this process: no child, no limits. Throws where it is refused. */
export async function readHere(bytes: Uint8Array): Promise<ModelReading> {
	const opened = readModelHead(bytes);
	if (!opened.ok) throw new Error(opened.refusal.message);
	const { head } = opened;
	const geometry = await openGeometry(bytesForEngine(bytes, head.file, head.schema), head.reading.metresPerUnit);
	if (!geometry) throw new Error('The geometry engine does not open the file.');
	const elements = readElements(head, geometry, pictureBuilder(), new Map(), () => {});
	const named = nameElements(elements.drafts, head.reading.grid);
	return {
		...head.reading,
		elements: named.elements,
		checkpoints: [...named.checkpoints],
		skipped: elements.skipped,
		findings: [...head.findings, ...elements.findings],
	};
}

export const readFileHere = (path: string): Promise<ModelReading> => readHere(new Uint8Array(readFileSync(path)));
