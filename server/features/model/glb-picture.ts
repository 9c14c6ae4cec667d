import { writeFile } from 'node:fs/promises';
import { Document, Logger, NodeIO } from '@gltf-transform/core';
import { EXTMeshoptCompression } from '@gltf-transform/extensions';
import { reorder, weld } from '@gltf-transform/functions';
import { MeshoptDecoder, MeshoptEncoder } from 'meshoptimizer';
import type { RawMesh } from './ifc-geometry.ts';

/** The model as binary glTF for the viewer. Never measured on: positions are single precision. */

type ClassMesh = { positions: Float32Array; elements: Float32Array; indices: Uint32Array; vertexCount: number; indexCount: number };

function grown<T extends Float32Array | Uint32Array>(array: T, needed: number, make: (size: number) => T): T {
	if (needed <= array.length) return array;
	const larger = make(Math.max(needed, array.length * 2));
	larger.set(array);
	return larger;
}

/** Gathers the elements' triangles, one mesh per class. The first element's whole metres become the origin. */
export function pictureBuilder(): {
	add: (className: string, entityNumber: number, mesh: RawMesh) => void;
	/** Writes the file; false where there is nothing to show. */
	write: (path: string) => Promise<boolean>;
} {
	const classes = new Map<string, ClassMesh>();
	const entityNumbers: number[] = [];
	let originM: [number, number, number] | null = null;
	return {
		add: (className, entityNumber, mesh) => {
			originM ??= [Math.floor(mesh.xyzM[0]!), Math.floor(mesh.xyzM[1]!), Math.floor(mesh.xyzM[2]!)];
			let into = classes.get(className);
			if (!into) {
				into = {
					positions: new Float32Array(3072),
					elements: new Float32Array(1024),
					indices: new Uint32Array(1024),
					vertexCount: 0,
					indexCount: 0,
				};
				classes.set(className, into);
			}
			const running = entityNumbers.push(entityNumber) - 1;
			const count = mesh.xyzM.length / 3;
			into.positions = grown(into.positions, (into.vertexCount + count) * 3, (size) => new Float32Array(size));
			into.elements = grown(into.elements, into.vertexCount + count, (size) => new Float32Array(size));
			into.indices = grown(into.indices, into.indexCount + mesh.triangles.length, (size) => new Uint32Array(size));
			for (let i = 0; i < mesh.xyzM.length; i++) into.positions[into.vertexCount * 3 + i] = mesh.xyzM[i]! - originM[i % 3]!;
			into.elements.fill(running, into.vertexCount, into.vertexCount + count);
			for (let i = 0; i < mesh.triangles.length; i++) into.indices[into.indexCount + i] = into.vertexCount + mesh.triangles[i]!;
			into.vertexCount += count;
			into.indexCount += mesh.triangles.length;
		},
		write: async (path) => {
			if (entityNumbers.length === 0) return false;
			await MeshoptEncoder.ready;
			await MeshoptDecoder.ready;
			const document = new Document();
			// Its default logger writes to standard output.
			document.setLogger(new Logger(Logger.Verbosity.SILENT));
			const buffer = document.createBuffer();
			const scene = document.createScene('model').setExtras({ originM, elements: entityNumbers });
			document.getRoot().setDefaultScene(scene);
			for (const [className, mesh] of classes) {
				const accessor = (type: 'VEC3' | 'SCALAR', array: Float32Array<ArrayBuffer> | Uint32Array<ArrayBuffer>) =>
					document.createAccessor().setType(type).setArray(array).setBuffer(buffer);
				const primitive = document
					.createPrimitive()
					.setAttribute('POSITION', accessor('VEC3', mesh.positions.slice(0, mesh.vertexCount * 3)))
					.setAttribute('_ELEMENT', accessor('SCALAR', mesh.elements.slice(0, mesh.vertexCount)))
					.setIndices(accessor('SCALAR', mesh.indices.slice(0, mesh.indexCount)));
				classes.delete(className);
				scene.addChild(document.createNode(className).setMesh(document.createMesh(className).addPrimitive(primitive)));
			}
			await document.transform(weld(), reorder({ encoder: MeshoptEncoder }));
			// Compressed, not quantised: quantising moves vertices by millimetres.
			document
				.createExtension(EXTMeshoptCompression)
				.setRequired(true)
				.setEncoderOptions({ method: EXTMeshoptCompression.EncoderMethod.QUANTIZE });
			const io = new NodeIO()
				.registerExtensions([EXTMeshoptCompression])
				.registerDependencies({ 'meshopt.encoder': MeshoptEncoder, 'meshopt.decoder': MeshoptDecoder });
			io.setLogger(new Logger(Logger.Verbosity.SILENT));
			await writeFile(path, await io.writeBinary(document));
			return true;
		},
	};
}
