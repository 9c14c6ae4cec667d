import { defaultCheckpointDensity } from '../site/site-settings.ts';
import { add, dot } from './affine.ts';
import { type CheckpointDraft, faceDraft, levelDraft, planDraft, type ShapeAnswer } from './checkpoint-draft.ts';
import { compassOf, largestPair, type PrismAxis, prismAxes, sectionOf } from './element-shape.ts';
import { edgeFaces, LEVEL_NZ, levelFace, longestEdge, planExtents, STANDING_NZ, spreadOverFace, treadLevels } from './level-checkpoints.ts';
import { slabOpenings } from './opening-checkpoints.ts';
import { extentAlong, type PlanarFace, planarFaces } from './planar-face.ts';
import type { Spacing } from './reading-choices.ts';
import { beamCheckpoints, inclinedCheckpoints, wallCheckpoints } from './side-checkpoints.ts';
import { type SolidMesh, weldMesh } from './solid-mesh.ts';
import { boltCheckpoints, columnCheckpoints, columnFaces } from './upright-checkpoints.ts';

/** What an element is taken for when its checkpoints are placed: from class, name and shape together. */
export type ElementKind = 'column' | 'pile' | 'bolt' | 'wall' | 'beam' | 'member' | 'slab' | 'footing' | 'plate' | 'stair' | 'none';

export type PlacedElement = ShapeAnswer & { kind: ElementKind };

const NO_SIZES = { length: null, height: null, thickness: null };

/** Parts of a building's structure by class. Doors, pipes, furniture, bars and the like are not checked by points. */
const STRUCTURAL =
	/^Ifc(Column|Pile|Wall|Beam|Member|Slab|Roof|Footing|Plate|DiscreteAccessory|MechanicalFastener|Fastener|Stair|Ramp|BuildingElementProxy|BuildingElementPart|BuiltElement|Bearing|DeepFoundation|CaissonFoundation|Course|Pavement|Kerb|Chimney|ElementAssembly|Mooringdevice)/i;

/** Turned so that it points up, or along a level axis east or north. */
const upward = (axes: readonly PrismAxis[], isSteep: (axis: PrismAxis) => boolean): PrismAxis | null => axes.find(isSteep) ?? null;

const isUpright = (axis: PrismAxis): boolean => axis.direction[2] > 0.7;

function inPieces(drafts: readonly CheckpointDraft[], sizesM: ShapeAnswer['sizesM'], kind: ElementKind, why: string): PlacedElement {
	return { kind, drafts: [...drafts], sizesM, why: drafts.length === 0 ? why : null };
}

function slabCheckpoints(
	mesh: SolidMesh,
	faces: readonly PlanarFace[],
	kind: 'slab' | 'footing',
	axes: readonly PrismAxis[],
	spacing: Spacing,
): PlacedElement {
	const top = levelFace(faces, true);
	const soffit = levelFace(faces, false);
	const pair = largestPair(faces);
	const isFlat = pair !== null && Math.abs(pair.first.normal[2]) > 0.7;
	const along = top ? longestEdge(mesh, top) : null;
	const extents = along ? planExtents(mesh, along) : null;
	const sizesM = {
		length: extents?.longerM ?? null,
		height: mesh.max[2] - mesh.min[2],
		thickness: isFlat ? pair.distanceM : null,
	};
	if (!top && isFlat && Math.abs(pair.first.normal[2]) <= LEVEL_NZ)
		return inPieces(
			[...spreadOverFace(mesh, pair.first, spacing), ...spreadOverFace(mesh, pair.second, spacing)],
			sizesM,
			kind,
			'no place on its sides is clear of edges',
		);
	// Wing walls and the like are written as slabs: their main faces stand, and are far larger than top and soffit.
	const isStanding =
		pair !== null && Math.abs(pair.first.normal[2]) < 0.26 && (!top || (kind === 'slab' && pair.second.areaM2 > 2 * top.areaM2));
	if (isStanding) return { kind: kind === 'slab' ? 'wall' : kind, ...wallCheckpoints(mesh, faces, spacing) };
	const drafts: CheckpointDraft[] = [];
	if (kind === 'footing') {
		const axis = upward(axes, (candidate) => candidate.direction[2] > 0.9999);
		if (axis && extents && extents.longerM <= 4) drafts.push(planDraft(axis.to, 'Its middle, on top', 'H'));
	}
	for (const face of [top, soffit]) if (face) drafts.push(...spreadOverFace(mesh, face, spacing));
	drafts.push(...edgeFaces(mesh, faces, spacing), ...slabOpenings(mesh, faces, spacing));
	return inPieces(drafts, sizesM, kind, 'it has no flat outer top or soffit');
}

function plateCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], axes: readonly PrismAxis[]): PlacedElement {
	const outer = faces.filter((face) => face.isOuter && face.isProven && !face.isCurved);
	const main = outer[0];
	if (!main) return { kind: 'plate', drafts: [], sizesM: NO_SIZES, why: 'it has no flat outer face whose outer side is proven' };
	const twin = outer.find(
		(face) =>
			face !== main &&
			face.areaM2 > main.areaM2 * 0.99 &&
			face.normal[0] * main.normal[0] + face.normal[1] * main.normal[1] + face.normal[2] * main.normal[2] < -0.999,
	);
	const axis = axes[0];
	const section = axis ? sectionOf(mesh, faces, axis) : null;
	// Of a plate with anchors the thickness is to the plate's own back, not to the anchors' ends.
	const backs = faces.filter(
		(face) =>
			face.isProven && face.areaM2 > main.areaM2 * 0.3 && dot(face.normal, main.normal) < -0.999 && main.offsetM + face.offsetM > 1e-4,
	);
	const thickness = backs.length > 0 ? Math.min(...backs.map((face) => main.offsetM + face.offsetM)) : null;
	const sizesM = { length: axis ? Math.max(axis.lengthM, section!.widthM) : null, height: null, thickness };
	if (Math.abs(main.normal[2]) > LEVEL_NZ) {
		// Of two equal faces the upper one is the one that can be seen; a plate cast into a soffit has its anchors above, so its lower face is the larger.
		const face = twin && main.normal[2] < 0 ? twin : main;
		return {
			kind: 'plate',
			drafts: [
				planDraft(face.centroid, 'Its middle', 'H'),
				levelDraft(
					mesh,
					face,
					face.centroid[0],
					face.centroid[1],
					face.normal[2] > 0 ? 'Top, middle' : 'Soffit, middle',
					face.normal[2] > 0 ? 'T' : 'U',
				),
			],
			sizesM,
			why: null,
		};
	}
	const drafts: CheckpointDraft[] = [
		planDraft(main.centroid, 'Its middle', 'H'),
		faceDraft(main, main.centroid, twin ? `${compassOf(main.normal).word} face, middle` : 'Outer face, middle', 'F'),
	];
	// Of two equal faces the shape does not tell which one is seen: both are offered.
	if (twin) {
		drafts[0] = planDraft(
			[(main.centroid[0] + twin.centroid[0]) / 2, (main.centroid[1] + twin.centroid[1]) / 2, (main.centroid[2] + twin.centroid[2]) / 2],
			'Its middle',
			'H',
		);
		drafts.push(faceDraft(twin, twin.centroid, `${compassOf(twin.normal).word} face, middle`, 'G'));
	}
	return { kind: 'plate', drafts, sizesM, why: null };
}

function stairCheckpoints(mesh: SolidMesh, faces: readonly PlanarFace[], isRamp: boolean, spacing: Spacing): PlacedElement {
	const drafts = treadLevels(mesh, faces);
	for (const face of faces.slice(0, 40)) {
		if (!face.isOuter || !face.isProven || face.isCurved || face.areaM2 < 0.5) continue;
		if (Math.abs(face.normal[2]) > LEVEL_NZ) continue;
		if (face.normal[2] < -0.1 || (face.normal[2] > 0.1 && isRamp)) drafts.push(...spreadOverFace(mesh, face, spacing));
	}
	const box = { length: null, height: mesh.max[2] - mesh.min[2], thickness: null };
	return inPieces(drafts, box, 'stair', 'it has no flat treads or sides that its shape proves');
}

const longEnough = (axis: PrismAxis, mesh: SolidMesh, faces: readonly PlanarFace[]): boolean =>
	axis.lengthM > 1.6 * sectionOf(mesh, faces, axis).widthM;

/** Chooses the kind: the class where it says enough and the shape agrees, else the shape. */
function byShape(
	className: string,
	name: string,
	mesh: SolidMesh,
	faces: readonly PlanarFace[],
	axes: readonly PrismAxis[],
	spacing: Spacing,
): PlacedElement {
	const is = (...words: string[]): boolean => words.some((word) => className.startsWith(`Ifc${word}`));
	const saysBolt = /bolt|anker|dowel|d[üu]bel|stud|rod/i.test(name);
	const longest = axes[0] ?? null;
	const isSlender = longest !== null && longEnough(longest, mesh, faces);
	if (is('MechanicalFastener', 'Fastener') || (is('DiscreteAccessory', 'BuildingElementProxy') && saysBolt && isSlender))
		return { kind: 'bolt', ...boltCheckpoints(mesh, faces, longest) };
	if (is('Stair', 'Ramp')) return stairCheckpoints(mesh, faces, is('Ramp'), spacing);
	if (is('Wall')) return { kind: 'wall', ...wallCheckpoints(mesh, faces, spacing) };
	if (is('Column', 'Pile', 'DeepFoundation', 'CaissonFoundation')) {
		const axis = upward(axes, isUpright);
		const kind = is('Column') ? 'column' : 'pile';
		if (axis) return { kind, ...columnCheckpoints(mesh, faces, axis, spacing) };
		if (longest && isSlender) return { kind: 'member', ...inclinedCheckpoints(mesh, faces, longest, spacing) };
		return columnByFaces(mesh, faces, kind, spacing);
	}
	if (is('Slab', 'Roof', 'Course', 'Pavement', 'Kerb')) return slabCheckpoints(mesh, faces, 'slab', axes, spacing);
	if (is('Footing')) return slabCheckpoints(mesh, faces, 'footing', axes, spacing);
	if (is('Plate', 'DiscreteAccessory') && !(isSlender && is('Plate'))) return plateCheckpoints(mesh, faces, axes);
	const main = largestPair(faces);
	const isPlateLike = main !== null && isThin(mesh, faces, axes, main.distanceM);
	if (longest && isSlender && !isPlateLike) {
		const slope = Math.abs(longest.direction[2]);
		if (slope > 0.966) return { kind: 'column', ...columnCheckpoints(mesh, faces, longest, spacing) };
		if (slope < 0.05) return { kind: 'beam', ...beamCheckpoints(mesh, faces, longest, spacing) };
		return { kind: 'member', ...inclinedCheckpoints(mesh, faces, longest, spacing) };
	}
	if (is('Beam', 'Member') && !isPlateLike)
		return { kind: 'beam', ...beamCheckpoints(mesh, faces, longest && Math.abs(longest.direction[2]) < 0.05 ? longest : null, spacing) };
	if (!main) return { kind: 'none', drafts: [], sizesM: NO_SIZES, why: 'it has no flat, opposite outer sides' };
	if (Math.max(mesh.max[0] - mesh.min[0], mesh.max[1] - mesh.min[1], mesh.max[2] - mesh.min[2]) < 1)
		return plateCheckpoints(mesh, faces, axes);
	if (Math.abs(main.first.normal[2]) > 0.7) return slabCheckpoints(mesh, faces, 'slab', axes, spacing);
	return { kind: 'wall', ...wallCheckpoints(mesh, faces, spacing) };
}

/** A plate whatever its class says: two extents at least eight times the third. */
function isThin(mesh: SolidMesh, faces: readonly PlanarFace[], axes: readonly PrismAxis[], thicknessM: number): boolean {
	const longest = axes[0];
	if (!longest) return false;
	const section = sectionOf(mesh, faces, longest);
	return !section.isRound && section.depthM < 1.05 * thicknessM && section.widthM > 8 * section.depthM;
}

/** A column without two equal ends (cut aslant, brackets, haunches): its flat sides, its top where that is level, and plan at the base where one level face stands for the section. */
function columnByFaces(mesh: SolidMesh, faces: readonly PlanarFace[], kind: 'column' | 'pile', spacing: Spacing): PlacedElement {
	const top = levelFace(faces, true);
	const base = levelFace(faces, false);
	const pair = largestPair(faces, (face) => Math.abs(face.normal[2]) < STANDING_NZ);
	const sides = columnFaces(mesh, faces, [0, 0, 1], spacing);
	const drafts: CheckpointDraft[] = [];
	const isWholeSection = base !== null && base.areaM2 > 0.9 * (mesh.max[0] - mesh.min[0]) * (mesh.max[1] - mesh.min[1]);
	if (isWholeSection) drafts.push(planDraft(base.centroid, 'At its base', 'A'));
	if (top) drafts.push(levelDraft(mesh, top, top.centroid[0], top.centroid[1], 'Top', 'T'));
	const across = pair ? extentAlong(mesh, [-pair.first.normal[1], pair.first.normal[0], 0]) : null;
	const [one, other] = [pair?.distanceM ?? null, across ? across.max - across.min : null];
	const sizesM = {
		length: one !== null && other !== null ? Math.max(one, other) : null,
		height: mesh.max[2] - mesh.min[2],
		thickness: one !== null && other !== null ? Math.min(one, other) : null,
	};
	return inPieces([...drafts, ...sides], sizesM, kind, 'no two equal ends prove its axis, and it has no flat outer sides');
}

/**
 * Places the checkpoints of one element from its triangles (absolute coordinates, metres, design frame). Orientation is proven by the
 * enclosed volume or the support plane; where it is not, the answer has `why` and no checkpoint. Places in the answer are absolute.
 */
export function placeCheckpoints(
	element: { class: string; name: string; xyzM: Float64Array; triangles: Uint32Array },
	spacing: Spacing = defaultCheckpointDensity,
): PlacedElement {
	if (!STRUCTURAL.test(element.class)) return withoutShape(`parts of class ${element.class} are not checked by points`);
	if (element.triangles.length > 180_000)
		return withoutShape(`its body has ${element.triangles.length / 3} triangles: too finely shaped for flat faces`);
	const mesh = weldMesh(element.xyzM, element.triangles);
	if (!mesh) return withoutShape('its body has no surface');
	const faces = planarFaces(mesh);
	if (!faces) return withoutShape('its body is curved or twisted: it has no flat faces to place checkpoints on');
	const placed = byShape(element.class, element.name, mesh, faces, prismAxes(mesh, faces), spacing);
	return { ...placed, drafts: placed.drafts.map((draft) => ({ ...draft, place: add(draft.place, mesh.originM) })) };
}

const withoutShape = (why: string): PlacedElement => ({ kind: 'none', drafts: [], sizesM: NO_SIZES, why });
