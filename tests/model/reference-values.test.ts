import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Checkpoint, Element, ModelReading } from '#shared/model/model-schema.ts';
import { readFileHere } from './read-model-file.ts';

/**
 * Values worked out from the attributes of real files by a reader that shares no code with ours and uses no tessellation. The files lie
 * beside the checkout while developing; where they do not, this says so and passes.
 */

const corpus = '../shared/corpus/ifc';
const isThere = existsSync(join(corpus, 'reference-values.json'));

type Reference = { file: string; globalId: string; ifcClass: string; quantity: string; value: number | number[]; frame: string };
const references: Reference[] = isThere ? JSON.parse(readFileSync(join(corpus, 'reference-values.json'), 'utf8')) : [];

const NEAR_M = 0.0001;

const apart = (a: readonly number[], b: readonly number[], count: number): number =>
	Math.hypot(...a.slice(0, count).map((part, at) => part - b[at]!));
const eitherWay = (a: readonly number[], b: readonly number[]): number =>
	Math.min(
		apart(a, b, 3),
		apart(
			a.map((part) => -part),
			b,
			3,
		),
	);

/** How far each checkpoint that shows the quantity is from the value; empty where none shows it. */
function misses(reference: Reference, checkpoints: readonly Checkpoint[], element: Element): number[] {
	const vector = Array.isArray(reference.value) ? reference.value : [];
	const number = typeof reference.value === 'number' ? reference.value : Number.NaN;
	const plans = (code: string) => checkpoints.filter(({ characteristic, mark }) => characteristic === 'plan' && mark.endsWith(code));
	const levels = (isSoffit: boolean) =>
		checkpoints.filter((checkpoint) => checkpoint.characteristic === 'level' && checkpoint.isSoffit === isSoffit);
	const axes = plans('.A').flatMap(({ place: from }) => plans('.H').map(({ place: to }) => [from, to] as const));
	const faces = checkpoints.filter(({ direction }) => direction !== null);
	switch (reference.quantity) {
		case 'centre plan position at base':
			return plans('.A').map(({ place }) => apart(place, vector, 2));
		case 'centre plan position at top':
			return plans('.H').map(({ place }) => apart(place, vector, 2));
		case 'base level':
			return [...plans('.A'), ...levels(true)].map(({ place }) => Math.abs(place[2] - number));
		case 'top level':
			return levels(false).map(({ place }) => Math.abs(place[2] - number));
		case 'soffit level':
			return levels(true).map(({ place }) => Math.abs(place[2] - number));
		case 'face normal (one of the two long faces, ±)':
		case 'main face normal (±)':
		case 'outer face normal':
			return faces.map(({ direction }) => eitherWay(direction!, vector));
		case 'top face normal':
			return [
				...faces.map(({ direction }) => direction!),
				...checkpoints.flatMap(({ surface }) =>
					surface ? [[-surface[0], -surface[1], 1].map((part) => part / Math.hypot(surface[0], surface[1], 1))] : [],
				),
			].map((direction) => apart(direction, vector, 3));
		case 'a point on the + long face':
			return faces.map(({ direction, place }) =>
				Math.abs(direction!.reduce((sum, part, at) => sum + part * (place[at]! - vector[at]!), 0)),
			);
		case 'outer face centre':
			return faces.map(({ place }) => apart(place, vector, 3));
		case 'placement origin in plan':
			return plans('.A').map(({ place }) => apart(place, vector, 2));
		case 'axis direction (±)':
		case 'axis direction':
			return axes.map(([from, to]) => {
				const way = to.map((part, at) => part - from[at]!);
				return eitherWay(
					way.map((part) => part / Math.hypot(...way)),
					vector,
				);
			});
		case 'mid point of the axis':
			return axes.map(([from, to]) =>
				apart(
					from.map((part, at) => (part + to[at]!) / 2),
					vector,
					3,
				),
			);
		case 'diameter':
			return element.sizesM.thickness === null ? [] : [Math.abs(element.sizesM.thickness - number)];
		case 'thickness':
		case 'length':
		case 'XDim (section size)':
		case 'YDim (section size)':
		case 'OverallWidth (section size)':
		case 'OverallDepth (section size)':
			// Which of an element's three sizes is called so depends on how it was extruded.
			return Object.values(element.sizesM).flatMap((size) => (size === null ? [] : [Math.abs(size - number)]));
		case 'highest point':
			return element.boxM ? [Math.abs(element.boxM.max[2] - number)] : [];
		case 'lowest point':
			return element.boxM ? [Math.abs(element.boxM.min[2] - number)] : [];
		default:
			return [];
	}
}

const toMap = (reading: ModelReading, [x, y, z]: readonly number[]): number[] => {
	const map = reading.mapConversion!;
	const size = Math.hypot(map.xAxisAbscissa, map.xAxisOrdinate);
	const [c, s] = [map.xAxisAbscissa / size, map.xAxisOrdinate / size];
	const k = (map.scale * map.mapUnitM) / reading.metresPerUnit;
	return [
		map.eastings * map.mapUnitM + k * (c * x! - s * y!),
		map.northings * map.mapUnitM + k * (s * x! + c * y!),
		map.orthogonalHeight * map.mapUnitM + k * z!,
	];
};

/** Attributes that do not describe the body's own sizes, or a size that is not among the three that are kept. */
const OTHER_SIZES: Readonly<Record<string, string>> = {
	'made-frame-metre-ifc4.ifc IfcFooting XDim (section size)': 'the shorter side in plan is not kept',
	'made-frame-mm-ifc4x3.ifc IfcFooting XDim (section size)': 'the shorter side in plan is not kept',
	'duplex-georef.ifc IfcFooting YDim (section size)': 'the shorter side in plan is not kept',
	'bridge-detailed-2x3.ifc IfcBeam YDim (section size)': 'a girder cut aslant at both ends: its length is not told from its shape',
	'bridge-detailed-2x3.ifc IfcBeam length': 'a girder cut aslant at both ends: its length is not told from its shape',
	'bridge-detailed-2x3.ifc IfcWallStandardCase length': 'clipped aslant: its body is 0.7 mm longer than its axis',
	'mini-project.ifc IfcMember YDim (section size)': 'a plate: its longest side and its thickness are kept',
};

const files = [...new Set(references.map(({ file }) => file))].filter((file) => file !== 'ios-beam-standard-case.ifc');

describe('the values of real files', () => {
	it.runIf(!isThere)('are not beside this checkout: nothing was compared', () => {
		expect(references).toEqual([]);
	});

	it.each(files)('%s: every checkpoint that shows a known value shows it within 0.1 mm', { timeout: 120_000 }, async (file) => {
		const reading = await readFileHere(join(corpus, file));
		let shown = 0;
		const wrong: string[] = [];
		for (const reference of references.filter((candidate) => candidate.file === file)) {
			const element = reading.elements.find(({ globalId }) => globalId === reference.globalId);
			if (!element) continue;
			const checkpoints = reading.checkpoints.filter(({ globalId }) => globalId === reference.globalId);
			const isMap = reference.frame === 'map' && Array.isArray(reference.value);
			const far = isMap
				? // Of a column the base, of a footing the top: both in plan; the height of a footing's top too.
					checkpoints
						.filter(({ characteristic }) => characteristic === 'plan')
						.map(({ place }) => apart(toMap(reading, place), reference.value as number[], 3))
				: misses(reference, checkpoints, element);
			if (far.length === 0) continue;
			shown++;
			const least = Math.min(...far);
			if (!(least < NEAR_M) && !(`${file} ${reference.ifcClass} ${reference.quantity}` in OTHER_SIZES))
				wrong.push(`${reference.globalId} ${reference.ifcClass} ${reference.quantity}: ${least} m off`);
		}
		expect(wrong).toEqual([]);
		// Files with sizes only, or elements along an alignment that contradicts itself, show none.
		if (!/house-xbim|gherkin|geographic/.test(file)) expect(shown).toBeGreaterThan(0);
	});
});
