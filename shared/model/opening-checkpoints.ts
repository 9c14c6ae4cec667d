import type { Vector3 } from '../geometry/frame.ts';
import { add, dot, scale } from './affine.ts';
import { type CheckpointDraft, faceDraft, levelDraft, metresInWords, planDraft } from './checkpoint-draft.ts';
import { compassOf } from './element-shape.ts';
import { patchesOf } from './face-patches.ts';
import { type FacePlan, isClear, nearestClear, placeOn, planOfFace, stations } from './face-plan.ts';
import { LEVEL_NZ, STANDING_NZ } from './level-checkpoints.ts';
import { firstHitM, isInsideMesh } from './mesh-ray.ts';
import type { PlanarFace } from './planar-face.ts';
import type { Spacing } from './reading-choices.ts';
import { roundHoles } from './round-hole.ts';
import type { SolidMesh } from './solid-mesh.ts';

/**
 * Edges of openings and recesses, from the cut body itself: the faces that something of the element lies in front of. What the file calls an
 * opening is not asked: it may not be cut, or be cut by something else.
 */

/** A side that far away, or nearer, is the other side of the same opening. */
const WIDEST_OPENING_M = 6;
const NARROWEST_M = 0.06;
const SHORTEST_M = 0.2;
/** In front of the face, to see whether another part of the element covers it. */
const BEFORE_M = 0.005;

/** In front of a head or sill, to look along it: more than a facet of a twisted soffit falls. */
const BESIDE_M = 0.05;

const MOST_FACES = 160;

/** Proven inner faces square to the sides of a wall or slab, not covered by another body of the element. */
function revealsOf(mesh: SolidMesh, faces: readonly PlanarFace[], across: Vector3): PlanarFace[] {
	return faces
		.slice(0, MOST_FACES)
		.filter(
			(face) =>
				!face.isOuter &&
				face.isProven &&
				!face.isCurved &&
				Math.abs(dot(face.normal, across)) < STANDING_NZ &&
				(Math.abs(face.normal[2]) < STANDING_NZ || Math.abs(face.normal[2]) > LEVEL_NZ) &&
				face.areaM2 > NARROWEST_M * SHORTEST_M,
		)
		.flatMap((face) => patchesOf(mesh, face))
		.slice(0, MOST_FACES);
}

const isBare = (mesh: SolidMesh, face: PlanarFace, place: Vector3): boolean =>
	!isInsideMesh(mesh, add(place, scale(face.normal, BEFORE_M)));

/** Whether the wall goes on at the other side, or for a head or sill at both sides: a step in its top, or an overhang, is no opening. */
function isEnclosed(mesh: SolidMesh, face: PlanarFace, place: Vector3, along: Vector3): boolean {
	const before = add(place, scale(face.normal, BESIDE_M));
	const ways = Math.abs(face.normal[2]) > LEVEL_NZ ? [along, scale(along, -1)] : [face.normal];
	return ways.every((way) => {
		const far = firstHitM(mesh, before, way);
		return far !== null && far <= WIDEST_OPENING_M;
	});
}

/** Which edge it is: the one on the side that the face turns its back to. */
const sideOf = (face: PlanarFace): { word: string; code: string } => {
	const compass = compassOf([-face.normal[0], -face.normal[1]]);
	return { word: compass.word.toLowerCase(), code: compass.code };
};

/** The middle of a reveal where it is clear, else the nearest clear place; null where the reveal is too narrow. */
function middleOf(plan: FacePlan): { u: number; v: number } | null {
	const [width, height] = [plan.uMax - plan.uMin, plan.vMax - plan.vMin];
	if (Math.min(width, height) < NARROWEST_M || Math.max(width, height) < SHORTEST_M) return null;
	return nearestClear(plan, (plan.uMin + plan.uMax) / 2, (plan.vMin + plan.vMax) / 2, Math.min(0.1, width / 4, height / 4));
}

/**
 * Of a wall: for each opening its standing edges (a face each, at half their height), its head and its sill (a level each, in the
 * middle). `across`: the normal of the wall's sides, `wall`: one of them laid out.
 */
export function wallOpenings(mesh: SolidMesh, faces: readonly PlanarFace[], across: Vector3, wall: FacePlan): CheckpointDraft[] {
	const drafts: CheckpointDraft[] = [];
	const fromEnd = (place: Vector3): string => {
		const u = dot(place, wall.u);
		const sense = u - wall.uMin < wall.uMax - u ? -1 : 1;
		const end = compassOf([wall.u[0] * sense, wall.u[1] * sense]).word.toLowerCase();
		return `${metresInWords(Math.min(u - wall.uMin, wall.uMax - u))} from the wall's ${end} end`;
	};
	const eastward = wall.u[0] < -1e-3 || (Math.abs(wall.u[0]) <= 1e-3 && wall.u[1] < 0) ? scale(wall.u, -1) : wall.u;
	for (const face of revealsOf(mesh, faces, across)) {
		// Heads and sills along the wall: laid out along the axes of the model, a thin turned one is narrower than it looks.
		const plan = planOfFace(mesh, face, Math.abs(face.normal[2]) > LEVEL_NZ ? eastward : undefined);
		const middle = middleOf(plan);
		if (!middle) continue;
		const place = placeOn(plan, middle.u, middle.v);
		if (!isBare(mesh, face, place) || !isEnclosed(mesh, face, place, wall.u)) continue;
		const where = `${metresInWords(place[2] - mesh.min[2])} above the wall's base, ${fromEnd(place)}`;
		if (face.normal[2] > LEVEL_NZ) drafts.push(levelDraft(mesh, face, place[0], place[1], `Opening, sill, ${where}`, 'OU'));
		else if (face.normal[2] < -LEVEL_NZ) drafts.push(levelDraft(mesh, face, place[0], place[1], `Opening, head, ${where}`, 'OT'));
		else {
			const side = sideOf(face);
			drafts.push(faceDraft(face, place, `Opening, ${side.word} edge, ${where}`, `O${side.code}`));
		}
	}
	return drafts;
}

/**
 * Of a slab, roof or footing: the standing edges of its openings (the middle of each) and of its recesses (along them as on the outer edges), and the centres of
 * round openings in plan.
 */
export function slabOpenings(mesh: SolidMesh, faces: readonly PlanarFace[], spacing: Spacing): CheckpointDraft[] {
	const drafts: CheckpointDraft[] = [];
	for (const face of revealsOf(mesh, faces, [0, 0, 1])) {
		const plan = planOfFace(mesh, face);
		const middle = middleOf(plan);
		if (!middle) continue;
		const place = placeOn(plan, middle.u, middle.v);
		const far = firstHitM(mesh, add(place, scale(face.normal, BEFORE_M)), face.normal);
		const isOpening = far !== null && far <= WIDEST_OPENING_M;
		const side = sideOf(face);
		const height = plan.vMax - plan.vMin;
		const along = isOpening ? [middle] : stations(plan.uMin, plan.uMax, 1.5 * spacing.faceSpacingM, 0.5).map((u) => ({ u, v: middle.v }));
		for (const { u, v } of along) {
			const at = placeOn(plan, u, v);
			if (!isClear(plan, u, v, Math.min(0.1, height / 4)) || !isBare(mesh, face, at)) continue;
			drafts.push(faceDraft(face, at, `${isOpening ? 'Opening' : 'Recess'}, ${side.word} edge`, `O${side.code}`));
		}
	}
	for (const hole of roundHoles(mesh, faces))
		drafts.push(planDraft(hole.centre, `Round opening of ${Math.round(hole.diameterM * 1000)} mm, centre`, 'OC'));
	return drafts;
}
