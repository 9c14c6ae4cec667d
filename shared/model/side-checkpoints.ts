import type { Vector3 } from '../geometry/frame.ts';
import { add, dot, scale } from './affine.ts';
import { type CheckpointDraft, faceDraft, levelDraft, metresInWords, planDraft, type ShapeAnswer } from './checkpoint-draft.ts';
import { compassOf, type FacePair, largestPair, type PrismAxis, sectionOf } from './element-shape.ts';
import { type FacePlan, isClear, nearestClear, placeOn, planOfFace, stations } from './face-plan.ts';
import { LEVEL_NZ, levelFace, STANDING_NZ } from './level-checkpoints.ts';
import { wallOpenings } from './opening-checkpoints.ts';
import { extentAlong, type PlanarFace } from './planar-face.ts';
import type { Spacing } from './reading-choices.ts';
import type { SolidMesh } from './solid-mesh.ts';

const EDGE_M = 0.1;

/** "4.3 m from its south end", or "" where the face has one station only. */
function alongInWords(plan: FacePlan, u: number): string {
	const fromStart = u - plan.uMin;
	const fromEnd = plan.uMax - u;
	if (Math.abs(fromStart - fromEnd) < 0.01) return '';
	const sense = fromStart < fromEnd ? -1 : 1;
	return `, ${metresInWords(Math.min(fromStart, fromEnd))} from its ${compassOf([plan.u[0] * sense, plan.u[1] * sense]).word.toLowerCase()} end`;
}

/** Heights of the rows up a side, metres from its foot: 0.3 m from foot and head, and between them where it is high. */
function rowsUp(heightM: number, spacing: Spacing): number[] {
	if (heightM < 1) return [heightM / 2];
	if (spacing.faceSpacingM < 2) return stations(0, heightM, spacing.faceSpacingM, 0.3);
	return heightM < 1.6 * spacing.faceSpacingM ? [0.3, heightM - 0.3] : [0.3, heightM / 2, heightM - 0.3];
}

/** Face checkpoints on a grid over a standing side: along it by the spacing, in rows 0.3 m from foot and head, so that none falls in an opening or near an edge; at least the place nearest the middle. */
function sideGrid(mesh: SolidMesh, face: PlanarFace, name: string | null, spacing: Spacing): CheckpointDraft[] {
	const plan = planOfFace(mesh, face);
	const width = plan.uMax - plan.uMin;
	const height = plan.vMax - plan.vMin;
	if (width < 0.08 || height < 0.05) return [];
	const compass = compassOf(face.normal);
	const margin = Math.min(EDGE_M, width / 4, height / 4);
	const rows = rowsUp(height, spacing);
	const columns = stations(plan.uMin, plan.uMax, spacing.faceSpacingM, 0.3);
	const places: { u: number; v: number }[] = [];
	for (const u of columns) for (const row of rows) if (isClear(plan, u, plan.vMin + row, margin)) places.push({ u, v: plan.vMin + row });
	if (places.length === 0) {
		const clear = nearestClear(plan, (plan.uMin + plan.uMax) / 2, (plan.vMin + plan.vMax) / 2, margin);
		if (clear) places.push(clear);
	}
	return places.map(({ u, v }) => {
		const place = placeOn(plan, u, v);
		const up = rows.length > 1 || height >= 1 ? `, ${metresInWords(place[2] - mesh.min[2])} above its base` : '';
		return faceDraft(face, place, `${name ?? `${compass.word} face`}${up}${alongInWords(plan, u)}`, compass.code);
	});
}

/** Levels along a long, nearly level face, by the spacing, at half its width. */
function levelsAlong(mesh: SolidMesh, face: PlanarFace, along: Vector3, spacing: Spacing): CheckpointDraft[] {
	// Always from west to east, or south to north, whichever of a wall's sides came first.
	const isWestward = along[0] < -1e-3 || (Math.abs(along[0]) <= 1e-3 && along[1] < 0);
	const plan = planOfFace(mesh, face, isWestward ? scale(along, -1) : along);
	const width = plan.vMax - plan.vMin;
	const word = face.normal[2] > 0 ? 'Top' : 'Soffit';
	const middle = (plan.vMin + plan.vMax) / 2;
	const margin = Math.min(0.05, width / 4);
	const places: { u: number; v: number }[] = [];
	for (const u of stations(plan.uMin, plan.uMax, spacing.levelSpacingM, 0.3))
		if (isClear(plan, u, middle, margin)) places.push({ u, v: middle });
	if (places.length === 0) {
		const clear = nearestClear(plan, (plan.uMin + plan.uMax) / 2, middle, margin);
		if (clear) places.push(clear);
	}
	return places.map(({ u, v }) => {
		const place = placeOn(plan, u, v);
		return levelDraft(mesh, face, place[0], place[1], `${word}${alongInWords(plan, u) || ', middle'}`, face.normal[2] > 0 ? 'T' : 'U');
	});
}

/** The level of a wall's base: one, as near to its middle as its width allows. */
function baseLevel(mesh: SolidMesh, faces: readonly PlanarFace[], along: Vector3): CheckpointDraft[] {
	const base = levelFace(faces, false);
	if (!base) return [];
	const plan = planOfFace(mesh, base, along);
	const width = plan.vMax - plan.vMin;
	const clear = nearestClear(plan, (plan.uMin + plan.uMax) / 2, (plan.vMin + plan.vMax) / 2, Math.min(0.05, width / 4));
	if (!clear) return [];
	const place = placeOn(plan, clear.u, clear.v);
	return [levelDraft(mesh, base, place[0], place[1], 'Base', 'B')];
}

/** Walls: faces on the two large sides on a grid, their free ends, and levels on top. The sides may lean. */
export function wallCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], spacing: Spacing): ShapeAnswer {
	const pair = largestPair(faces, (face) => Math.abs(face.normal[2]) < 0.9);
	if (!pair)
		return {
			drafts: [],
			sizesM: { length: null, height: mesh.max[2] - mesh.min[2], thickness: null },
			why: 'it has no two flat, opposite outer sides',
		};
	const plan = planOfFace(mesh, pair.first);
	const lengthAlong = extentAlong(mesh, plan.u);
	const drafts = [...sideGrid(mesh, pair.first, null, spacing), ...sideGrid(mesh, pair.second, null, spacing)];
	for (const face of faces.slice(0, 60)) {
		if (!face.isOuter || !face.isProven || face.isCurved || Math.abs(face.normal[2]) > STANDING_NZ) continue;
		if (Math.abs(dot(face.normal, plan.u)) < 0.9) continue;
		const end = planOfFace(mesh, face);
		if (end.uMax - end.uMin < 0.15 || end.vMax - end.vMin < 0.3) continue;
		const clear = nearestClear(end, (end.uMin + end.uMax) / 2, (end.vMin + end.vMax) / 2, Math.min(EDGE_M, (end.uMax - end.uMin) / 4));
		if (!clear) continue;
		const place = placeOn(end, clear.u, clear.v);
		const compass = compassOf(face.normal);
		drafts.push(faceDraft(face, place, `${compass.word} end, ${metresInWords(place[2] - mesh.min[2])} above its base`, compass.code));
	}
	const top = levelFace(faces, true);
	if (top) drafts.push(...levelsAlong(mesh, top, plan.u, spacing));
	drafts.push(...baseLevel(mesh, faces, plan.u), ...wallOpenings(mesh, faces, pair.first.normal, plan));
	return {
		drafts,
		sizesM: { length: lengthAlong.max - lengthAlong.min, height: mesh.max[2] - mesh.min[2], thickness: pair.distanceM },
		why: drafts.length === 0 ? 'no place on its sides is clear of openings and edges' : null,
	};
}

function sizesOfBeam(mesh: SolidMesh, faces: readonly PlanarFace[], axis: PrismAxis | null, pair: FacePair | null): ShapeAnswer['sizesM'] {
	if (axis) {
		const section = sectionOf(mesh, faces, axis);
		const up = mesh.max[2] - mesh.min[2];
		// Depth is the section's upward size where the beam lies level.
		const isLevel = Math.abs(axis.direction[2]) < 0.01;
		if (!isLevel) return { length: axis.lengthM, height: section.widthM, thickness: section.depthM };
		const isUpWidth = Math.abs(section.widthM - up) <= Math.abs(section.depthM - up);
		return {
			length: axis.lengthM,
			height: isUpWidth ? section.widthM : section.depthM,
			thickness: isUpWidth ? section.depthM : section.widthM,
		};
	}
	if (!pair) return { length: null, height: mesh.max[2] - mesh.min[2], thickness: null };
	const along = extentAlong(mesh, planOfFace(mesh, pair.first).u);
	return { length: along.max - along.min, height: mesh.max[2] - mesh.min[2], thickness: pair.distanceM };
}

/** Beams that lie nearly level: faces on the flat sides, levels on top and soffit; where no side is flat enough (steel profiles), plan at both ends of the axis. */
export function beamCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], axis: PrismAxis | null, spacing: Spacing): ShapeAnswer {
	const pair = largestPair(
		faces,
		(face) => Math.abs(face.normal[2]) < STANDING_NZ && (!axis || Math.abs(dot(face.normal, axis.direction)) < 0.1),
	);
	const along = axis?.direction ?? (pair ? planOfFace(mesh, pair.first).u : null);
	const drafts: CheckpointDraft[] = pair
		? [...sideGrid(mesh, pair.first, null, spacing), ...sideGrid(mesh, pair.second, null, spacing)]
		: [];
	if (along) {
		for (const isUp of [true, false]) {
			const face = levelFace(faces, isUp);
			if (face) drafts.push(...levelsAlong(mesh, face, along, spacing));
		}
	}
	if (axis && !drafts.some((draft) => draft.characteristic === 'face')) drafts.push(...endPlans(axis));
	return {
		drafts,
		sizesM: sizesOfBeam(mesh, faces, axis, pair),
		why: drafts.length === 0 ? 'it has no flat sides, top or axis that its shape proves' : null,
	};
}

function endPlans(axis: PrismAxis): CheckpointDraft[] {
	if (Math.abs(axis.direction[2]) > 0.9) return [planDraft(axis.from, 'At its base', 'A'), planDraft(axis.to, 'At its top', 'H')];
	const name = (sense: 1 | -1): string => compassOf([axis.direction[0] * sense, axis.direction[1] * sense]).word.toLowerCase();
	return [planDraft(axis.from, `Axis, ${name(-1)} end`, 'A'), planDraft(axis.to, `Axis, ${name(1)} end`, 'H')];
}

/** Members that are neither upright nor level (braces, raking beams): faces along the own normal at stations on every flat side, and plan at the ends of the axis. */
export function inclinedCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], axis: PrismAxis, spacing: Spacing): ShapeAnswer {
	const drafts: CheckpointDraft[] = endPlans(axis);
	for (const face of faces.slice(0, 40)) {
		if (!face.isOuter || !face.isProven || face.isCurved || Math.abs(dot(face.normal, axis.direction)) > 0.0175) continue;
		const plan = planOfFace(mesh, face, axis.direction);
		const width = plan.vMax - plan.vMin;
		if (width < 0.08) continue;
		const isUp = face.normal[2] > 0.1;
		const isDown = face.normal[2] < -0.1;
		const compass = compassOf(face.normal);
		for (const u of stations(plan.uMin, plan.uMax, spacing.faceSpacingM, 0.3)) {
			const v = (plan.vMin + plan.vMax) / 2;
			if (!isClear(plan, u, v, Math.min(EDGE_M, width / 4))) continue;
			const far = u - plan.uMin;
			const label = `${isUp ? 'Upper side' : isDown ? 'Lower side' : `${compass.word} side`}, ${metresInWords(far)} from its ${axis.direction[2] >= 0 ? 'lower' : 'upper'} end`;
			drafts.push(
				faceDraft(face, add(plan.foot, add(scale(plan.u, u), scale(plan.v, v))), label, isUp ? 'F' : isDown ? 'G' : compass.code),
			);
		}
	}
	const section = sectionOf(mesh, faces, axis);
	return { drafts, sizesM: { length: axis.lengthM, height: section.widthM, thickness: section.depthM }, why: null };
}

/** Whether a face lies level enough for a level checkpoint. */
export const isLevelFace = (face: PlanarFace): boolean => Math.abs(face.normal[2]) > LEVEL_NZ;
