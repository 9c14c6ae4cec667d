import { type BufferAttribute, type BufferGeometry, Float32BufferAttribute, Matrix4, Mesh, Ray, type Vector3 } from 'three';
import { MeshoptDecoder } from 'three/addons/libs/meshopt_decoder.module.js';
import { GLTFLoader } from 'three/addons/loaders/GLTFLoader.js';
import type { MeshBVH } from 'three-mesh-bvh';
import type { ViewBox } from '#src/ui/view-commands.ts';
import { elementEdges } from './element-edges.ts';

/** The drawing of one IFC class: its faces, its edges and what finds a face under a ray. */
export interface PicturePart {
	readonly name: string;
	readonly faces: BufferGeometry;
	readonly edges: BufferGeometry;
	/** Built when first asked for: a ray is cast long after the picture stands. */
	readonly tree: () => MeshBVH;
}

/** A model's picture, ready to draw. The scene's frame: design frame less `originM`, metres, Z up. Never measured on. */
export interface ModelPicture {
	readonly originM: readonly [number, number, number];
	/** By running number: the entity number of each element in the file. */
	readonly entityNumbers: readonly number[];
	readonly parts: readonly PicturePart[];
	/** In the scene's frame. */
	readonly box: ViewBox;
	readonly dispose: () => void;
}

const leastEdgeDeg = 20;
