import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dropBuriedPlateFaces } from '#server/features/model/buried-plate-faces.ts';
import type { ElementDraft } from '#shared/model/model-elements.ts';
import { placeCheckpoints } from '#shared/model/place-checkpoints.ts';
import { box, type MadeMesh, moved, ownOf, type Point } from './made-mesh.ts';

function draftOf(entityNumber: number, className: string, mesh: MadeMesh): ElementDraft {
	const part = (k: number, pick: (...values: number[]) => number): number =>
		[...mesh.xyzM].filter((_, at) => at % 3 === k).reduce((a, b) => pick(a, b));
	const corner = (pick: (...values: number[]) => number): Point => [part(0, pick), part(1, pick), part(2, pick)];
	return {
		entityNumber,
		globalId: String(entityNumber),
		class: className,
		name: '',
		tag: '',
		storey: '',
		boxM: { min: corner(Math.min), max: corner(Math.max) },
		placed: placeCheckpoints({ class: className, name: '', ...mesh }),
	};
}

const facesOf = (draft: ElementDraft) => draft.placed!.drafts.filter(({ characteristic }) => characteristic === 'face');

describe('a standing plate', () => {
	const yaw = fc.double({ min: -Math.PI, max: Math.PI, noNaN: true });
	const shift = fc.tuple(
		fc.double({ min: -5e5, max: 5e6, noNaN: true }),
		fc.double({ min: -5e5, max: 5e6, noNaN: true }),
		fc.double({ min: -100, max: 1000, noNaN: true }),
	) as fc.Arbitrary<Point>;
	// A wall 0.3 thick about y = 0, a plate 0.02 thick: flush with its face, standing on it, or half sunk; on either side.
	const wall = moved(box(6, 0.3, 3), 0, [0, 0, 0]);
	const plateAt = (y: number): MadeMesh => moved(box(0.2, 0.02, 0.2), 0, [0.4, y, 1.4]);

	it.each([
		['flush', 0.14],
		['standing on the face', 0.16],
		['half sunk', 0.15],
	])('%s shows the face that looks out of the wall it is in', (_, far) => {
		fc.assert(
			fc.property(yaw, shift, fc.constantFrom(1, -1), (yawRad, at, side) => {
				const meshes = new Map([
					[1, moved(wall, yawRad, at)],
					[2, moved(plateAt(side * far), yawRad, at)],
				]);
				const drafts = [draftOf(1, 'IfcWall', meshes.get(1)!), draftOf(2, 'IfcPlate', meshes.get(2)!)];
				expect(facesOf(drafts[1]!)).toHaveLength(2);
				const wallBefore = drafts[0]!.placed;
				dropBuriedPlateFaces(drafts, (entityNumber) => ({ ...meshes.get(entityNumber)!, isSound: true }));
				const faces = facesOf(drafts[1]!);
				expect(faces).toHaveLength(1);
				expect(ownOf(faces[0]!.direction!, yawRad, [0, 0, 0])[1]).toBeCloseTo(side, 9);
				expect(ownOf(faces[0]!.place, yawRad, at)[1]).toBeCloseTo(side * (far + 0.01), 5);
				expect(drafts[0]!.placed).toBe(wallBefore);
			}),
			{ numRuns: 25 },
		);
	});

	it('far from any host, or buried whole, keeps both: nobody can tell', () => {
		for (const y of [2, 0]) {
			const meshes = new Map([
				[1, wall],
				[2, plateAt(y)],
			]);
			const drafts = [draftOf(1, 'IfcWall', wall), draftOf(2, 'IfcPlate', plateAt(y))];
			dropBuriedPlateFaces(drafts, (entityNumber) => ({ ...meshes.get(entityNumber)!, isSound: true }));
			expect(facesOf(drafts[1]!)).toHaveLength(2);
		}
	});
});
