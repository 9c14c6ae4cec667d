import fc from 'fast-check';
import { Box3, OrthographicCamera, Vector3 } from 'three';
import { describe, expect, it } from 'vitest';
import { placeCamera, viewBetween, viewOf } from '#src/ui/stage-camera.ts';

const place = fc.double({ min: -500, max: 500, noNaN: true });
const side = fc.double({ min: 0.1, max: 200, noNaN: true });
const direction = fc
	.tuple(fc.double({ min: 0, max: 2 * Math.PI, noNaN: true }), fc.double({ min: -1.4, max: 1.4, noNaN: true }))
	.map(([yawRad, tiltRad]) => new Vector3(Math.cos(yawRad) * Math.cos(tiltRad), Math.sin(yawRad) * Math.cos(tiltRad), Math.sin(tiltRad)));

describe('the camera of the 3D picture', () => {
	it('shows every corner of what it frames, between near and far, from any direction and in any picture', () => {
		fc.assert(
			fc.property(
				fc.tuple(place, place, place),
				fc.tuple(side, side, side),
				direction,
				fc.integer({ min: 200, max: 1600 }),
				fc.integer({ min: 240, max: 1200 }),
				(min, size, way, width, height) => {
					const box = new Box3(new Vector3(...min), new Vector3(min[0] + size[0], min[1] + size[1], min[2] + size[2]));
					const camera = new OrthographicCamera(-width / 2, width / 2, height / 2, -height / 2);
					camera.up.set(0, 0, 1);
					placeCamera(camera, viewOf(box, way, { width, height }), box);
					for (let corner = 0; corner < 8; corner++) {
						const seen = new Vector3(
							corner & 1 ? box.max.x : box.min.x,
							corner & 2 ? box.max.y : box.min.y,
							corner & 4 ? box.max.z : box.min.z,
						).project(camera);
						for (const part of [seen.x, seen.y, seen.z]) expect(Math.abs(part)).toBeLessThanOrEqual(1 + 1e-9);
					}
				},
			),
		);
	});

	it('moves from one view to the other and ends where it was sent', () => {
		const from = { target: new Vector3(0, 0, 0), direction: new Vector3(1, 0, 0), zoom: 10 };
		const to = { target: new Vector3(5, 5, 1), direction: new Vector3(0, 1, 0), zoom: 160 };
		const half = viewBetween(from, to, 0.5);
		expect(half.zoom).toBeCloseTo(40, 9);
		expect(half.direction.length()).toBeCloseTo(1, 12);
		expect(viewBetween(from, to, 1).target.distanceTo(to.target)).toBeLessThan(1e-12);
	});
});
