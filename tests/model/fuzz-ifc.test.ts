import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { DAMAGES, mutateIfc } from '#server/scripts/mutate-ifc.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { bytesForEngine } from '#shared/model/ifc-schema-name.ts';
import { refOf } from '#shared/model/part21-value.ts';
import { readModelHead } from '#shared/model/read-model-head.ts';

/** A small sample of what server/scripts/fuzz-ifc.ts does by hand with ten thousand files and with the geometry engine. */

const folder = 'fixtures/ifc';
const sources = readdirSync(folder)
	.filter((name) => name.endsWith('.ifc') && !name.startsWith('bridge'))
	.map((name) => new Uint8Array(readFileSync(join(folder, name))));

function readWhole(bytes: Uint8Array): string {
	const opened = readModelHead(bytes);
	if (!opened.ok) {
		expect(opened.refusal.message.length).toBeGreaterThan(20);
		return opened.refusal.code;
	}
	const { file, structure, placementOf, findings, schema } = opened.head;
	for (const type of file.typeCounts().keys()) {
		for (const number of file.ofType(type)) {
			structure.storeyOf(number);
			placementOf(refOf(file.entity(number)?.args[5]));
		}
	}
	bytesForEngine(bytes, file, schema);
	for (const { message } of findings) expect(message).not.toMatch(/NaN|undefined|Infinity/);
	return 'read';
}

describe('damaged files', () => {
	it('are read or refused by our own code, without throwing', { timeout: 120_000 }, () => {
		const ends = new Map<string, number>();
		const hows = new Set<string>();
		for (let index = 0; index < 400; index++) {
			const random = seededRandom(99 * 1_000_003 + index);
			const { bytes, how } = mutateIfc(random, sources[index % sources.length]!);
			for (const one of how.split(' + ')) hows.add(one);
			const end = readWhole(bytes);
			ends.set(end, (ends.get(end) ?? 0) + 1);
		}
		// The sample does its work only if every damage was done and some of each end was met.
		expect([...hows].sort()).toEqual(Object.keys(DAMAGES).sort());
		expect(ends.get('read')).toBeGreaterThan(100);
		expect(ends.get('cut-file')).toBeGreaterThan(10);
	});

	it('are the same at every run', () => {
		const once = (): Uint8Array => mutateIfc(seededRandom(5), sources[0]!).bytes;
		expect(once()).toEqual(once());
		expect(once()).not.toEqual(sources[0]);
	});
});
