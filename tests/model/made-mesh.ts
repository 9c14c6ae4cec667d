/** Meshes whose truth is known, built without any code of the reader: places in metres. */

export type MadeMesh = { xyzM: Float64Array; triangles: Uint32Array };
export type Point = [number, number, number];

/** A body of cells between breakpoints; faces only where solid meets nothing, each a quad of two triangles with vertices of its own, outward. */
export function cellBody(xs: number[], ys: number[], zs: number[], isSolid: (i: number, j: number, k: number) => boolean): MadeMesh {
	const points: number[] = [];
	const triangles: number[] = [];
	const solid = (i: number, j: number, k: number): boolean =>
		i >= 0 && j >= 0 && k >= 0 && i < xs.length - 1 && j < ys.length - 1 && k < zs.length - 1 && isSolid(i, j, k);
	const quad = (...corners: Point[]): void => {
		const first = points.length / 3;
		for (const corner of corners) points.push(...corner);
		triangles.push(first, first + 1, first + 2, first, first + 2, first + 3);
	};
	for (let i = 0; i < xs.length - 1; i++) {
		for (let j = 0; j < ys.length - 1; j++) {
			for (let k = 0; k < zs.length - 1; k++) {
				if (!solid(i, j, k)) continue;
				const [x0, x1, y0, y1, z0, z1] = [xs[i]!, xs[i + 1]!, ys[j]!, ys[j + 1]!, zs[k]!, zs[k + 1]!];
				if (!solid(i - 1, j, k)) quad([x0, y0, z0], [x0, y0, z1], [x0, y1, z1], [x0, y1, z0]);
				if (!solid(i + 1, j, k)) quad([x1, y0, z0], [x1, y1, z0], [x1, y1, z1], [x1, y0, z1]);
				if (!solid(i, j - 1, k)) quad([x0, y0, z0], [x1, y0, z0], [x1, y0, z1], [x0, y0, z1]);
				if (!solid(i, j + 1, k)) quad([x0, y1, z0], [x0, y1, z1], [x1, y1, z1], [x1, y1, z0]);
				if (!solid(i, j, k - 1)) quad([x0, y0, z0], [x0, y1, z0], [x1, y1, z0], [x1, y0, z0]);
				if (!solid(i, j, k + 1)) quad([x0, y0, z1], [x1, y0, z1], [x1, y1, z1], [x0, y1, z1]);
			}
		}
	}
	return { xyzM: Float64Array.from(points), triangles: Uint32Array.from(triangles) };
}

export const box = (x: number, y: number, z: number): MadeMesh => cellBody([-x / 2, x / 2], [-y / 2, y / 2], [0, z], () => true);

/** An upright many-sided prism whose corners lie on a circle. */
export function roundBody(radiusM: number, heightM: number, sides: number): MadeMesh {
	const points: number[] = [];
	const triangles: number[] = [];
	for (let i = 0; i < sides; i++) {
		const angle = (2 * Math.PI * i) / sides;
		points.push(radiusM * Math.cos(angle), radiusM * Math.sin(angle), 0, radiusM * Math.cos(angle), radiusM * Math.sin(angle), heightM);
	}
	for (let i = 0; i < sides; i++) {
		const [a, b] = [2 * i, 2 * ((i + 1) % sides)];
		triangles.push(a, b, b + 1, a, b + 1, a + 1);
		if (i > 1) triangles.push(0, 2 * i, 2 * i - 2, 1, 2 * i - 1, 2 * i + 1);
	}
	return { xyzM: Float64Array.from(points), triangles: Uint32Array.from(triangles) };
}

/** Moved: p ↦ turn(p) + shift, with a turn about the vertical, and z sheared by the fall (rise per metre along x and y before the turn). */
export function moved(mesh: MadeMesh, yawRad: number, shift: Point, fall: [number, number] = [0, 0]): MadeMesh {
	const xyzM = new Float64Array(mesh.xyzM.length);
	for (let at = 0; at < xyzM.length; at += 3) {
		const [x, y, z] = [mesh.xyzM[at]!, mesh.xyzM[at + 1]!, mesh.xyzM[at + 2]!];
		xyzM[at] = x * Math.cos(yawRad) - y * Math.sin(yawRad) + shift[0];
		xyzM[at + 1] = x * Math.sin(yawRad) + y * Math.cos(yawRad) + shift[1];
		xyzM[at + 2] = z + fall[0] * x + fall[1] * y + shift[2];
	}
	return { xyzM, triangles: mesh.triangles };
}

/** The same body wound inside out. */
export const insideOut = (mesh: MadeMesh): MadeMesh => ({
	xyzM: mesh.xyzM,
	triangles: Uint32Array.from(mesh.triangles, (_, at) => mesh.triangles[at - (at % 3) + ((3 - (at % 3)) % 3)]!),
});

/** Triangles wound at random, as open shells come. `isTurned` for each triangle. */
export const woundAtRandom = (mesh: MadeMesh, isTurned: (triangle: number) => boolean): MadeMesh => ({
	xyzM: mesh.xyzM,
	triangles: Uint32Array.from(
		mesh.triangles,
		(_, at) => mesh.triangles[isTurned(Math.floor(at / 3)) ? at - (at % 3) + ((3 - (at % 3)) % 3) : at]!,
	),
});

/** A world point in the body's own axes before `moved`. */
export function ownOf(p: readonly number[], yawRad: number, shift: Point): Point {
	const [x, y] = [p[0]! - shift[0], p[1]! - shift[1]];
	return [x * Math.cos(yawRad) + y * Math.sin(yawRad), -x * Math.sin(yawRad) + y * Math.cos(yawRad), p[2]! - shift[2]];
}

/** A round plate with a round hole, both many-sided with corners on the true circles. */
export function ringBody(outerM: number, innerM: number, heightM: number, sides: number): MadeMesh {
	const points: number[] = [];
	const triangles: number[] = [];
	for (let i = 0; i < sides; i++) {
		const [c, s] = [Math.cos((2 * Math.PI * i) / sides), Math.sin((2 * Math.PI * i) / sides)];
		points.push(outerM * c, outerM * s, 0, outerM * c, outerM * s, heightM, innerM * c, innerM * s, 0, innerM * c, innerM * s, heightM);
	}
	for (let i = 0; i < sides; i++) {
		const [a, b] = [4 * i, 4 * ((i + 1) % sides)];
		const quad = (p: number, q: number, r: number, s: number): void => {
			triangles.push(p, q, r, p, r, s);
		};
		quad(a, b, b + 1, a + 1);
		quad(b + 2, a + 2, a + 3, b + 3);
		quad(a + 1, b + 1, b + 3, a + 3);
		quad(b, a, a + 2, b + 2);
	}
	return { xyzM: Float64Array.from(points), triangles: Uint32Array.from(triangles) };
}
