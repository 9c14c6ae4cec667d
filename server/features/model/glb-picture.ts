import { writeFile } from 'node:fs/promises';
import { Document, Logger, NodeIO } from '@gltf-transform/core';
import { EXTMeshoptCompression } from '@gltf-transform/extensions';
import { reorder } from '@gltf-transform/functions';
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

/** An element's positions in single precision less the origin, equal ones joined (the engine gives each face its own), and the triangles that are left. */
function joined(mesh: RawMesh, originM: readonly [number, number, number]): { local: Float32Array; triangles: Uint32Array } {
	const count = mesh.xyzM.length / 3;
	const local = new Float32Array(mesh.xyzM.length);
	for (let i = 0; i < local.length; i++) local[i] = mesh.xyzM[i]! - originM[i % 3]!;
	const bits = new Uint32Array(local.buffer);
	let size = 16;
	while (size < count * 2) size *= 2;
	const table = new Int32Array(size).fill(-1);
	const newNumber = new Uint32Array(count);
	let kept = 0;
	for (let v = 0; v < count; v++) {
		const [x, y, z] = [bits[v * 3]!, bits[v * 3 + 1]!, bits[v * 3 + 2]!];
		let hash = Math.imul(x, 0x9e3779b1) ^ Math.imul(y, 0x85ebca6b) ^ Math.imul(z, 0xc2b2ae35);
		hash ^= hash >>> 15;
		let slot = hash & (size - 1);
		for (;;) {
			const at = table[slot]!;
			if (at < 0) {
				// Kept vertices move to the front; those before `v` have been read.
				table[slot] = kept;
				local.copyWithin(kept * 3, v * 3, v * 3 + 3);
				newNumber[v] = kept++;
				break;
			}
			if (bits[at * 3] === x && bits[at * 3 + 1] === y && bits[at * 3 + 2] === z) {
				newNumber[v] = at;
				break;
			}
			slot = (slot + 1) & (size - 1);
		}
	}
	const triangles = new Uint32Array(mesh.triangles.length);
	let used = 0;
	for (let t = 0; t + 2 < mesh.triangles.length; t += 3) {
		const [a, b, c] = [newNumber[mesh.triangles[t]!]!, newNumber[mesh.triangles[t + 1]!]!, newNumber[mesh.triangles[t + 2]!]!];
		if (a === b || b === c || c === a) continue;
		triangles[used++] = a;
		triangles[used++] = b;
		triangles[used++] = c;
	}
	return { local: local.subarray(0, kept * 3), triangles: triangles.subarray(0, used) };
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
			const { local, triangles } = joined(mesh, originM);
			const count = local.length / 3;
			into.positions = grown(into.positions, (into.vertexCount + count) * 3, (size) => new Float32Array(size));
			into.elements = grown(into.elements, into.vertexCount + count, (size) => new Float32Array(size));
			into.indices = grown(into.indices, into.indexCount + triangles.length, (size) => new Uint32Array(size));
			into.positions.set(local, into.vertexCount * 3);
			into.elements.fill(running, into.vertexCount, into.vertexCount + count);
			for (let i = 0; i < triangles.length; i++) into.indices[into.indexCount + i] = into.vertexCount + triangles[i]!;
			into.vertexCount += count;
			into.indexCount += triangles.length;
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
			await document.transform(reorder({ encoder: MeshoptEncoder }));
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
