import fc from 'fast-check';
import { BoxGeometry, type BufferGeometry, CylinderGeometry, EdgesGeometry, IcosahedronGeometry } from 'three';
import { describe, expect, it } from 'vitest';
import { elementEdges } from '#src/features/model/element-edges.ts';

/** Segments as text, ends in order, so that two drawings of the same edges compare equal. */
function segments(positions: ArrayLike<number>): string[] {
	const found: string[] = [];
	for (let i = 0; i < positions.length; i += 6) {
		const ends = [0, 3].map((from) => [0, 1, 2].map((axis) => (Math.round(positions[i + from + axis]! * 1e3) + 0).toString()).join(' '));
		found.push(ends.sort().join(' – '));
	}
	return found.sort();
}

function arraysOf(geometry: BufferGeometry) {
	const positions = geometry.getAttribute('position').array;
	const index = geometry.index?.array ?? Uint32Array.from({ length: positions.length / 3 }, (_, i) => i);
	return { positions, index };
}

describe('the edges of elements', () => {
	const shapes: [string, BufferGeometry][] = [
		['a box', new BoxGeometry(2, 3, 4)],
		['a box of many triangles', new BoxGeometry(2, 3, 4, 3, 2, 5)],
		['a pile of 24 sides', new CylinderGeometry(0.6, 0.6, 8, 24)],
		['a six-sided post', new CylinderGeometry(0.4, 0.4, 3, 6)],
		['a ball', new IcosahedronGeometry(1, 2)],
	];
	it.each(shapes)('are those of three’s own EdgesGeometry for %s', (_, geometry) => {
		const { positions, index } = arraysOf(geometry);
		const edges = elementEdges(positions, index, new Float32Array(positions.length / 3), 20);
		expect(segments(edges.positions)).toEqual(segments(new EdgesGeometry(geometry, 20).getAttribute('position').array));
	});

	it('belong each to their own element, also where two bodies share a face', () => {
		fc.assert(
			fc.property(fc.integer({ min: 1, max: 5 }), fc.double({ min: 0.5, max: 3, noNaN: true }), (count, size) => {
				const positions: number[] = [];
				const index: number[] = [];
				const elementOf: number[] = [];
				for (let body = 0; body < count; body++) {
					const box = new BoxGeometry(size, size, size).translate(body * size, 0, 0);
					const { positions: own, index: ownIndex } = arraysOf(box);
					index.push(...Array.from(ownIndex, (corner) => corner + elementOf.length));
					positions.push(...own);
					elementOf.push(...Array.from({ length: own.length / 3 }, () => body));
				}
				const edges = elementEdges(positions, index, elementOf, 20);
				// Twelve edges a box, none lost to its neighbour and none merged across.
				expect(edges.elements).toHaveLength(count * 24);
				for (let body = 0; body < count; body++) expect(edges.elements.filter((element) => element === body)).toHaveLength(24);
			}),
		);
	});
});
