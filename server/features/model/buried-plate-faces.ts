import type { Vector3 } from '#shared/geometry/frame.ts';
import { add, dot, scale, subtract } from '#shared/model/affine.ts';
import type { CheckpointDraft } from '#shared/model/checkpoint-draft.ts';
import { isInsideMesh } from '#shared/model/mesh-ray.ts';
import type { ElementDraft } from '#shared/model/model-elements.ts';
import type { ElementKind } from '#shared/model/place-checkpoints.ts';
import { type SolidMesh, weldMesh } from '#shared/model/solid-mesh.ts';
import type { RawMesh } from './ifc-geometry.ts';

/** Of a plate that stands, shape alone does not tell which of its two equal faces shows: what it is cast into does. */

const HOSTS: readonly ElementKind[] = ['wall', 'column', 'beam', 'slab', 'footing', 'member', 'pile'];
/** In front of the face: is that inside the host? More than a plate stands off its host, less than it is thick with its grout. */
const BEFORE_M = 0.005;
const NEAR_M = 0.02;
/** Hosts are shaped a second time for this. */
const MOST_HOSTS = 2000;

const touches = (plate: ElementDraft, host: ElementDraft): boolean =>
	plate.boxM !== null &&
	host.boxM !== null &&
	[0, 1, 2].every((k) => plate.boxM!.min[k]! < host.boxM!.max[k]! + NEAR_M && plate.boxM!.max[k]! > host.boxM!.min[k]! - NEAR_M);

/** The two opposite faces of a plate between which its shape did not choose; null for every other element. */
function twinFaces(draft: ElementDraft): readonly [CheckpointDraft, CheckpointDraft] | null {
	if (draft.placed?.kind !== 'plate') return null;
	const [first, second, ...others] = draft.placed.drafts.filter(({ characteristic }) => characteristic === 'face');
	if (!first?.direction || !second?.direction || others.length > 0) return null;
	return dot(first.direction, second.direction) < -0.999 ? [first, second] : null;
}

/**
 * Takes from each standing plate the face that looks into its host: 5 mm in front of it lies inside the host's closed body, and 5 mm in front
 * of the other does not. Where no host, or both, or neither says so, both faces stay. `meshOf`: an element's triangles again, absolute
 * metres, design frame.
 */
export function dropBuriedPlateFaces(drafts: readonly ElementDraft[], meshOf: (entityNumber: number) => RawMesh | null): void {
	const hosts = drafts.filter(({ placed }) => placed !== null && HOSTS.includes(placed.kind));
	const meshes = new Map<number, SolidMesh | null>();
	const solidOf = (entityNumber: number): SolidMesh | null => {
		const known = meshes.get(entityNumber);
		if (known !== undefined) return known;
		if (meshes.size >= MOST_HOSTS) return null;
		const raw = meshOf(entityNumber);
		const mesh = raw?.isSound ? weldMesh(raw.xyzM, raw.triangles) : null;
		meshes.set(entityNumber, mesh);
		return mesh;
	};
	for (const plate of drafts) {
		const twins = twinFaces(plate);
		if (!twins) continue;
		const isBuried = [false, false];
		for (const host of hosts) {
			if (host === plate || !touches(plate, host)) continue;
			const mesh = solidOf(host.entityNumber);
			if (!mesh) continue;
			twins.forEach(({ place, direction }, at) => {
				const before: Vector3 = add(subtract(place, mesh.originM), scale(direction!, BEFORE_M));
				if (isInsideMesh(mesh, before)) isBuried[at] = true;
			});
		}
		if (isBuried[0] === isBuried[1]) continue;
		const buried = twins[isBuried[0] ? 0 : 1];
		plate.placed = { ...plate.placed!, drafts: plate.placed!.drafts.filter((draft) => draft !== buried) };
	}
}
