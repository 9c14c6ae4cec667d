import {
	type BufferAttribute,
	BufferGeometry,
	DoubleSide,
	Float32BufferAttribute,
	type InterleavedBufferAttribute,
	Mesh,
	type Ray,
} from 'three';
import { MeshoptDecoder } from 'three/addons/libs/meshopt_decoder.module.js';
import { type GLTF, GLTFLoader } from 'three/addons/loaders/GLTFLoader.js';
import { MeshBVH } from 'three-mesh-bvh';
import type { ViewBox } from '#src/ui/view-commands.ts';
import { elementEdges } from './element-edges.ts';

/** The drawing of one IFC class. */
export interface PicturePart {
	readonly name: string;
	readonly faces: BufferGeometry;
	readonly edges: BufferGeometry;
	/** Running numbers of the element under a ray, the nearest first, each with its distance in metres and its face's normal toward the ray's start. */
	readonly under: (
		ray: Ray,
	) => { readonly element: number; readonly distanceM: number; readonly normal: readonly [number, number, number] }[];
}

/** A model's picture, ready to draw. The scene's frame: design frame less `originM`, metres, Z up. Never measured on. */
export interface ModelPicture {
	readonly originM: readonly [number, number, number];
	/** By running number: the element's entity number in the file. */
	readonly entityNumbers: readonly number[];
	readonly parts: readonly PicturePart[];
	/** In the scene's frame. */
	readonly box: ViewBox;
	readonly dispose: () => void;
}

/** Two planes that meet at less are one surface to the eye. */
const leastEdgeDeg = 20;

function plainFloats(attribute: BufferAttribute | InterleavedBufferAttribute): Float32Array {
	const { count, itemSize } = attribute;
	const floats = new Float32Array(count * itemSize);
	for (let i = 0; i < count; i++) for (let part = 0; part < itemSize; part++) floats[i * itemSize + part] = attribute.getComponent(i, part);
	return floats;
}

function partOf(mesh: Mesh): PicturePart | null {
	const position = mesh.geometry.getAttribute('position');
	const element = mesh.geometry.getAttribute('_element');
	const index = mesh.geometry.index;
	if (position === undefined || element === undefined || index === null) return null;
	// The writer keeps Z up under a root that turns it for other viewers: the mesh's own numbers are what is wanted.
	const positions = plainFloats(position);
	const elements = plainFloats(element);
	const faces = new BufferGeometry();
	faces.setAttribute('position', new Float32BufferAttribute(positions, 3));
	faces.setAttribute('_element', new Float32BufferAttribute(elements, 1));
	faces.setIndex(index.clone());
	faces.computeBoundingBox();
	faces.computeBoundingSphere();
	const found = elementEdges(positions, index.array, elements, leastEdgeDeg);
	const edges = new BufferGeometry();
	edges.setAttribute('position', new Float32BufferAttribute(found.positions, 3));
	edges.setAttribute('_element', new Float32BufferAttribute(found.elements, 1));
	edges.boundingSphere = faces.boundingSphere;
	let tree: MeshBVH | null = null;
	return {
		name: mesh.name,
		faces,
		edges,
		under: (ray) => {
			// Built at the first press: a press comes long after the picture stands. Indirect: the order of the faces is the drawing's.
			tree ??= new MeshBVH(faces, { indirect: true });
			return tree
				.raycast(ray, DoubleSide)
				.flatMap(({ face, distance: distanceM }) => {
					if (!face) return [];
					const { x, y, z } = face.normal;
					const side = face.normal.dot(ray.direction) > 0 ? -1 : 1;
					return [{ element: elements[face.a]!, distanceM, normal: [side * x, side * y, side * z] as const }];
				})
				.sort((a, b) => a.distanceM - b.distanceM);
		},
	};
}

/** What the writer says beside the picture: the origin that was taken off, and the entity number of each element. */
function extrasOf(gltf: GLTF): Pick<ModelPicture, 'originM' | 'entityNumbers'> {
	const places: unknown[] = [gltf.asset.extras, gltf.scene.userData, ...gltf.scene.children.map((child) => child.userData), gltf.userData];
	for (const extras of places) {
		if (typeof extras !== 'object' || extras === null || !('originM' in extras) || !('elements' in extras)) continue;
		const { originM, elements } = extras;
		if (!Array.isArray(originM) || originM.length !== 3 || !Array.isArray(elements)) continue;
		return {
			originM: [Number(originM[0]), Number(originM[1]), Number(originM[2])],
			entityNumbers: elements.map((element: unknown) =>
				typeof element === 'object' && element !== null && 'entityNumber' in element ? Number(element.entityNumber) : Number(element),
			),
		};
	}
	throw new Error('The picture does not say where its origin is.');
}

/** Reads the binary glTF of a revision. Throws where it is none of ours; the page then shows the plan. */
export async function readPicture(bytes: ArrayBuffer): Promise<ModelPicture> {
	const loader = new GLTFLoader();
	loader.setMeshoptDecoder(MeshoptDecoder);
	const gltf = await loader.parseAsync(bytes, '');
	const extras = extrasOf(gltf);
	const parts: PicturePart[] = [];
	gltf.scene.traverse((object) => {
		if (!(object instanceof Mesh)) return;
		const part = partOf(object);
		if (part !== null) parts.push(part);
		object.geometry.dispose();
	});
	const boxes = parts.map(({ faces }) => faces.boundingBox).filter((box) => box !== null);
	if (boxes.length === 0) throw new Error('The picture shows nothing.');
	const box = boxes.reduce((all, each) => all.union(each), boxes[0]!.clone());
	return {
		...extras,
		parts,
		box: { min: box.min.toArray(), max: box.max.toArray() },
		dispose: () => {
			for (const { faces, edges } of parts) {
				faces.dispose();
				edges.dispose();
			}
		},
	};
}
