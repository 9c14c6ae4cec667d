import type { Vector3 } from '../geometry/frame.ts';
import type { Characteristic } from '../tolerance/sheet-schema.ts';
import type { PlanarFace } from './planar-face.ts';
import type { SolidMesh } from './solid-mesh.ts';

/** A checkpoint before it has an id and a mark. Places in metres less the mesh's origin. */
export type CheckpointDraft = {
	characteristic: Characteristic;
	place: Vector3;
	direction: Vector3 | null;
	label: string;
	surface: [number, number, number] | null;
	isSoffit: boolean;
	/** What stands for it in a mark, before a number: A base, H head, T top, U underside, E east … */
	code: string;
};

export type ElementSizes = { length: number | null; height: number | null; thickness: number | null };

export type ShapeAnswer = { drafts: CheckpointDraft[]; sizesM: ElementSizes; why: string | null };

/** "2.8 m": one decimal, a minus only where it is not zero. */
export function metresInWords(lengthM: number): string {
	const text = (Math.round(lengthM * 10) / 10).toFixed(1);
	return `${text === '-0.0' ? '0.0' : text} m`;
}

/** The design surface z = a·x + b·y + c of a face that lies nearly level, in absolute design coordinates. Flat to 0.02 mm: a = b = 0. */
export function surfaceOf(mesh: SolidMesh, face: PlanarFace): [number, number, number] {
	const [nx, ny, nz] = face.normal;
	let min = Infinity;
	let max = -Infinity;
	for (const t of face.triangles) {
		for (let k = 0; k < 3; k++) {
			const z = mesh.xyzM[mesh.triangles[t * 3 + k]! * 3 + 2]!;
			min = Math.min(min, z);
			max = Math.max(max, z);
		}
	}
	if (max - min < 0.00002) return [0, 0, face.centroid[2] + mesh.originM[2]];
	const a = -nx / nz;
	const b = -ny / nz;
	const z = face.offsetM / nz;
	return [a, b, z + mesh.originM[2] - a * mesh.originM[0] - b * mesh.originM[1]];
}

/** A level checkpoint on a nearly level face at the plan place x, y (less the origin). */
export function levelDraft(mesh: SolidMesh, face: PlanarFace, x: number, y: number, label: string, code: string): CheckpointDraft {
	const surface = surfaceOf(mesh, face);
	const z = surface[0] * (x + mesh.originM[0]) + surface[1] * (y + mesh.originM[1]) + surface[2] - mesh.originM[2];
	return { characteristic: 'level', place: [x, y, z], direction: null, label, surface, isSoffit: face.normal[2] < 0, code };
}

/** A face checkpoint. */
export function faceDraft(face: PlanarFace, place: Vector3, label: string, code: string): CheckpointDraft {
	return { characteristic: 'face', place, direction: face.normal, label, surface: null, isSoffit: false, code };
}

/** A plan checkpoint. */
export function planDraft(place: Vector3, label: string, code: string): CheckpointDraft {
	return { characteristic: 'plan', place, direction: null, label, surface: null, isSoffit: false, code };
}
