import { readFileSync } from 'node:fs';
import { pictureBuilder } from '#server/features/model/glb-picture.ts';
import { openGeometry } from '#server/features/model/ifc-geometry.ts';
import { readElements } from '#server/features/model/ifc-reading.ts';
import type { ReadIfcOptions, ReadIfcOutcome } from '#server/features/model/read-ifc-in-child.ts';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { nameElements } from '#shared/model/model-elements.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';
import { noChoices } from '#shared/model/reading-choices.ts';

/**
 * Stands in for `readIfcInChild` where a test is about what becomes of a reading: the same reading, of a harmless file, without the process of its
 * own that costs seconds to start. Limits, cancelling and broken engines are tested with the real one.
 */
export async function readInProcess({ path, glbPath, choices = noChoices, onProgress }: ReadIfcOptions): Promise<ReadIfcOutcome> {
	const bytes = new Uint8Array(readFileSync(path));
	const opened = readModelHead(bytes, choices);
	if (!opened.ok) return { ok: false, ...opened.refusal };
	const { head } = opened;
	const geometry = await openGeometry(bytesForEngine(bytes, head.file, head.schema), head.reading.metresPerUnit);
	if (!geometry) return { ok: false, code: 'not-ifc', message: 'The geometry engine cannot open the file.' };
	const picture = pictureBuilder();
	const elements = readElements(
		head,
		geometry,
		picture,
		new Map(),
		(_, done, of) => onProgress?.({ doing: 'Working out shapes', done, of }),
		choices,
	);
	const hasPicture = await picture.write(glbPath);
	const named = nameElements(elements.drafts, head.reading.grid, choices.placing.kinds);
	return {
		ok: true,
		hasPicture,
		reading: {
			...head.reading,
			elements: named.elements,
			checkpoints: [...named.checkpoints],
			skipped: elements.skipped,
			findings: [...head.findings, ...elements.findings],
			choices,
		},
	};
}
