import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { keepMarks } from '#shared/model/keep-marks.ts';
import { longestMark, whyNotNamed } from '#shared/model/mark-rules.ts';
import type { Checkpoint, Element } from '#shared/model/model-schema.ts';
import { placePicked } from '#shared/model/place-picked.ts';
import { writeFieldCsv } from '#shared/model/write-field-csv.ts';
import { pointNameKey } from '#shared/survey/point-name.ts';

const element = (entityNumber: number, mark: string, globalId = `G${entityNumber}`): Element => ({
	entityNumber,
	globalId,
	class: 'IfcColumn',
	name: '',
	tag: '',
	storey: '',
	mark,
	title: mark,
	sizesM: { length: null, height: null, thickness: null },
	boxM: { min: [0, 0, 0], max: [1, 1, 3] },
});
const checkpoint = (of: Element, end: string, over: Partial<Checkpoint> = {}): Checkpoint => ({
	id: `${of.entityNumber}${end}`,
	entityNumber: of.entityNumber,
	globalId: of.globalId,
	mark: `${of.mark}.${end}`,
	characteristic: 'face',
	place: [1, 0.5, 1],
	direction: [1, 0, 0],
	label: '',
	surface: null,
	isSoffit: false,
	...over,
});

describe('names kept across revisions', () => {
	const name = fc.stringMatching(/^[A-D][1-3](-G)?$/);
	it('are given to whom they belong, and leave every name the only one of its spelling', () => {
		fc.assert(
			fc.property(
				fc.uniqueArray(name, { minLength: 2, maxLength: 12, selector: pointNameKey }),
				fc.uniqueArray(fc.tuple(fc.nat(11), name), { maxLength: 6, selector: ([at]) => at }),
				(marks, renamings) => {
					const elements = marks.map((mark, at) => element(at, mark));
					const firsts = renamings.filter(
						([, mark], at) => renamings.findIndex(([, other]) => pointNameKey(other) === pointNameKey(mark)) === at,
					);
					const kept = new Map(firsts.map(([at, mark]) => [`G${at}`, mark]));
					const named = keepMarks(
						elements,
						elements.map((one) => checkpoint(one, 'E1')),
						kept,
					);
					for (const [globalId, mark] of kept) {
						const own = named.elements.find((one) => one.globalId === globalId);
						if (own) expect(own.mark).toBe(mark);
					}
					expect(new Set(named.elements.map(({ mark }) => pointNameKey(mark))).size).toBe(elements.length);
					expect(named.checkpoints.map(({ mark }) => mark)).toEqual(named.elements.map(({ mark }) => `${mark}.E1`));
				},
			),
		);
	});
	it('name nobody where a GlobalId stands twice', () => {
		const twins = [element(1, 'A1', 'same'), element(2, 'A2', 'same')];
		expect(keepMarks(twins, [], new Map([['same', 'RIVER']])).elements.map(({ mark }) => mark)).toEqual(['A1', 'A2']);
	});
});

describe('a new name', () => {
	const named = (id: string, mark: string, ends: string[]) => ({
		elementId: id,
		mark,
		checkpointMarks: ends.map((end) => `${mark}.${end}`),
	});
	const elements = [named('a', 'C3-G', ['E1', 'NE12']), named('b', 'C4-G', ['T'])];
	it('may be exchanged, may not stand for two, also in another spelling or for a checkpoint', () => {
		expect(
			whyNotNamed(
				elements,
				new Map([
					['a', 'C4-G'],
					['b', 'C3-G'],
				]),
			),
		).toBeNull();
		for (const [id, mark] of [
			['a', 'C4-G'],
			['a', 'c4_g'],
			['b', 'C3-G-E1'],
		] as const)
			expect(whyNotNamed(elements, new Map([[id, mark]]))).toMatchObject({ elementId: id });
	});
	it('leaves room for its longest checkpoint', () => {
		const room = longestMark - '.NE12'.length;
		expect(whyNotNamed(elements, new Map([['a', 'X'.repeat(room)]]))).toBeNull();
		expect(whyNotNamed(elements, new Map([['a', 'X'.repeat(room + 1)]]))?.message).toContain(`may have ${room}.`);
	});
});

describe('a pick on the model', () => {
	const column = element(1, 'C3-G');
	it('takes the exact plane where the reading has one, the picked one else', () => {
		const face = checkpoint(column, 'E1', { place: [1.00000003, 0.2, 0.5] });
		expect(placePicked(column, [face], { place: [1.0004, 0.7, 2], normal: [1, 0.0005, 0] })).toMatchObject({
			characteristic: 'face',
			direction: [1, 0, 0],
			place: [1.00000003, 0.7, 2],
		});
		const other = placePicked(column, [face], { place: [0, 0.7, 2], normal: [-1, 0, 0] });
		expect(other).toMatchObject({ characteristic: 'face', direction: [-1, 0, 0], place: [0, 0.7, 2] });
	});
	it('asks a level of what lies nearly level, falls with it, and knows a soffit', () => {
		const slope = [0.02, 0, 2.9] as [number, number, number];
		const top = checkpoint(column, 'T', { characteristic: 'level', direction: null, surface: slope, place: [0, 0, 2.9] });
		const length = Math.hypot(0.02, 1);
		expect(placePicked(column, [top], { place: [0.5, 0.5, 2.9103], normal: [-0.02 / length, 0, 1 / length] })).toMatchObject({
			characteristic: 'level',
			surface: slope,
			place: [0.5, 0.5, 2.9 + 0.01],
			isSoffit: false,
		});
		expect(placePicked(column, [top], { place: [0.5, 0.5, 0], normal: [0, 0, -1] })).toMatchObject({
			characteristic: 'level',
			surface: [0, 0, 0],
			isSoffit: true,
		});
	});
	it('is refused beside the element or without a direction', () => {
		expect(placePicked(column, [], { place: [1.01, 0, 0], normal: [1, 0, 0] })).toMatchObject({ code: 'not-on-element' });
		expect(placePicked(column, [], { place: [1, 0, 0], normal: [0, 0, 0] })).toMatchObject({ code: 'no-direction' });
		expect(placePicked({ ...column, boxM: null }, [], { place: [1, 0, 0], normal: [1, 0, 0] })).toMatchObject({ code: 'no-body' });
	});
});

it('a list for the field is metres to a tenth of a millimetre, and quotes what would break a row', () => {
	const odd = checkpoint(element(1, 'A,1'), 'T', { characteristic: 'level', place: [512340.12345, -0.00004, 3] });
	expect(writeFieldCsv([odd])).toBe('mark,easting,northing,height,code\n"A,1.T",512340.1235,0.0000,3.0000,LEVEL\n');
});
