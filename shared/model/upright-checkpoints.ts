import type { Vector3 } from '../geometry/frame.ts';
import { dot } from './affine.ts';
import { type CheckpointDraft, faceDraft, levelDraft, metresInWords, planDraft, type ShapeAnswer } from './checkpoint-draft.ts';
import { compassOf, type PrismAxis, sectionOf } from './element-shape.ts';
import { nearestClear, placeOn, planOfFace, stations } from './face-plan.ts';
import type { PlanarFace } from './planar-face.ts';
import type { Spacing } from './reading-choices.ts';
import type { SolidMesh } from './solid-mesh.ts';

const LEVEL_NZ = 0.9986;
const NARROWEST_FACE_M = 0.08;

/** Heights up a flat side, metres from its lower edge: 0.3 m from both ends and the middle; fewer where it is low, more where they are wanted closer than 2 m. */
function rowsUp(heightM: number, spacing: Spacing): number[] {
	if (heightM < 1) return [heightM / 2];
	if (spacing.faceSpacingM < 2) return stations(0, heightM, spacing.faceSpacingM, 0.3);
	if (heightM < spacing.faceSpacingM) return [0.3, heightM - 0.3];
	return [0.3, heightM / 2, heightM - 0.3];
}

/**
 * Columns and piles: plan at the base and top of the axis, level on top, and faces on flat sides (0.3 m above the base, middle, 0.3 m below
 * the top). `axis` from base to top; it may lean.
 */
export function columnCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], axis: PrismAxis, spacing: Spacing): ShapeAnswer {
	const drafts: CheckpointDraft[] = [planDraft(axis.from, 'At its base', 'A'), planDraft(axis.to, 'At its top', 'H')];
	const top = axis.caps[1];
	if (top.normal[2] > LEVEL_NZ) drafts.push(levelDraft(mesh, top, top.centroid[0], top.centroid[1], 'Top, middle', 'T'));
	const section = sectionOf(mesh, faces, axis);
	drafts.push(...columnFaces(mesh, faces, axis.direction, spacing));
	return { drafts, sizesM: { length: section.widthM, height: axis.lengthM, thickness: section.depthM }, why: null };
}

/** Faces on the flat outer sides along an upright direction, in rows up each. */
export function columnFaces(mesh: SolidMesh, faces: readonly PlanarFace[], direction: Vector3, spacing: Spacing): CheckpointDraft[] {
	const drafts: CheckpointDraft[] = [];
	for (const face of faces.slice(0, 60)) {
		if (!face.isOuter || !face.isProven || face.isCurved || Math.abs(dot(face.normal, direction)) > 0.0175) continue;
		const plan = planOfFace(mesh, face);
		const width = plan.uMax - plan.uMin;
		if (width < NARROWEST_FACE_M) continue;
		const compass = compassOf(face.normal);
		const margin = Math.min(0.1, width / 4);
		for (const row of rowsUp(plan.vMax - plan.vMin, spacing)) {
			const clear = nearestClear(plan, (plan.uMin + plan.uMax) / 2, plan.vMin + row, margin);
			if (!clear || Math.abs(clear.v - plan.vMin - row) > 0.3) continue;
			const place = placeOn(plan, clear.u, clear.v);
			drafts.push(faceDraft(face, place, `${compass.word} face, ${metresInWords(place[2] - mesh.min[2])} above its base`, compass.code));
		}
	}
	return drafts;
}

/** Anchor bolts, dowels, studs that stand: plan and level at the top of the axis; where the body is no plain prism (head, nut, hook), of its top face. */
export function boltCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], axis: PrismAxis | null): ShapeAnswer {
	const isUpright = axis !== null && Math.abs(axis.direction[2]) > 0.9;
	const top = isUpright
		? axis.caps[1]
		: faces.find((face) => face.isOuter && face.isProven && face.normal[2] > LEVEL_NZ && face.centroid[2] > mesh.max[2] - 0.001);
	const section = axis ? sectionOf(mesh, faces, axis) : null;
	const sizesM = { length: axis ? axis.lengthM : mesh.max[2] - mesh.min[2], height: null, thickness: section ? section.depthM : null };
	if (!top) return { drafts: [], sizesM, why: 'its top is not one flat face, so its axis cannot be told from the shape' };
	const drafts: CheckpointDraft[] = [planDraft(top.centroid, 'At its top', 'H')];
	if (top.normal[2] > LEVEL_NZ) drafts.push(levelDraft(mesh, top, top.centroid[0], top.centroid[1], 'Top', 'T'));
	return { drafts, sizesM, why: null };
}
