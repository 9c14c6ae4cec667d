import { type FlatMesh, IfcAPI, LogLevel } from 'web-ifc';
import type { Affine } from '#shared/model/affine.ts';

/** The geometry engine (web-ifc), one model open. Positions in doubles, metres, design frame (Z up). */
export type IfcGeometry = {
	/** Elements in the order of the file, with the class in its usual spelling. */
	elements: { entityNumber: number; class: string }[];
	/** Triangles of one element; `move` carries them further (a grid placement, metres). Null where there are none. Throws when the engine is broken for good. */
	meshOf: (entityNumber: number, move: Affine | null) => RawMesh | null;
	/** A placement as the engine has it, row by row as twelve numbers, file units. */
	placementOf: (entityNumber: number) => Affine | null;
};

export type RawMesh = { xyzM: Float64Array; triangles: Uint32Array; isSound: boolean };

/** Spatial structure, openings and what else the engine calls an element but nobody builds. */
const NOT_BUILT =
	/^Ifc(Site|Building|BuildingStorey|Space|SpatialZone|Facility|FacilityPart\w*|Bridge|BridgePart|Road|RoadPart|Railway|RailwayPart|MarineFacility|MarinePart|External\w+|Spatial\w+|Opening\w+|VoidingFeature|ProjectionElement|SurfaceFeature|Feature\w+|Grid|Annotation|Alignment\w*|Referent|Linear\w+|Positioning\w+|\w*Port|VirtualElement|EarthworksCut|Structural\w+)$/;

/** Farthest a coordinate may lie, metres. */
const FARTHEST_M = 1e8;

/** Opens a model. Null where the engine refuses it. */
export async function openGeometry(bytes: Uint8Array, metresPerUnit: number): Promise<IfcGeometry | null> {
	const api = new IfcAPI();
	await api.Init();
	api.SetLogLevel(LogLevel.LOG_LEVEL_OFF);
	let model: number;
	try {
		// The default reserves 64 MiB for any file; the meshes are the same.
		model = api.OpenModel(bytes, { TAPE_SIZE: 1 << 20, COORDINATE_TO_ORIGIN: false, CIRCLE_SEGMENTS: 24 });
	} catch {
		return null;
	}
	if (model < 0) return null;

	const elements: { entityNumber: number; class: string }[] = [];
	for (const { typeID, typeName } of api.GetAllTypesOfModel(model)) {
		if (!api.IsIfcElement(typeID) || NOT_BUILT.test(typeName)) continue;
		const lines = api.GetLineIDsWithType(model, typeID);
		for (let i = 0; i < lines.size(); i++) elements.push({ entityNumber: lines.get(i), class: typeName });
	}
	const seen = new Set<number>();
	const once = elements.filter(({ entityNumber }) => !seen.has(entityNumber) && seen.add(entityNumber));
	once.sort((a, b) => a.entityNumber - b.entityNumber);

	return {
		elements: once,
		meshOf: (entityNumber, move) => collect(api, model, api.GetFlatMesh(model, entityNumber, false), metresPerUnit, move),
		placementOf: (entityNumber) => {
			const m = api.GetWorldTransformMatrix(model, entityNumber);
			const rows = [0, 1, 2].flatMap((row) => [m[row], m[row + 4], m[row + 8], m[row + 12]]);
			return rows.every((value) => typeof value === 'number' && Number.isFinite(value)) ? (rows as number[]) : null;
		},
	};
}

function collect(api: IfcAPI, model: number, mesh: FlatMesh, metresPerUnit: number, move: Affine | null): RawMesh | null {
	const parts: { vertices: Float32Array; indices: Uint32Array; m: readonly number[] }[] = [];
	let vertexCount = 0;
	let indexCount = 0;
	for (let i = 0; i < mesh.geometries.size(); i++) {
		const placed = mesh.geometries.get(i);
		const geometry = api.GetGeometry(model, placed.geometryExpressID);
		const vertices = api.GetVertexArray(geometry.GetVertexData(), geometry.GetVertexDataSize());
		const indices = api.GetIndexArray(geometry.GetIndexData(), geometry.GetIndexDataSize());
		// Without this, and the deletion below, the engine's memory grows with each element.
		(geometry as unknown as { delete: () => void }).delete();
		if (indices.length === 0 || vertices.length === 0) continue;
		parts.push({ vertices, indices, m: placed.flatTransformation });
		vertexCount += vertices.length / 6;
		indexCount += indices.length;
	}
	(mesh.geometries as unknown as { delete: () => void }).delete();
	if (indexCount === 0) return null;

	const xyzM = new Float64Array(vertexCount * 3);
	const triangles = new Uint32Array(indexCount);
	let vertex = 0;
	let index = 0;
	let isSound = true;
	for (const { vertices, indices, m } of parts) {
		const first = vertex;
		for (let at = 0; at < vertices.length; at += 6) {
			const [x, y, z] = [vertices[at]!, vertices[at + 1]!, vertices[at + 2]!];
			// The engine turns the model Y-up: (X, Z, −Y). Back, exactly, and to metres.
			let px = (m[0]! * x + m[4]! * y + m[8]! * z + m[12]!) * metresPerUnit;
			let py = -(m[2]! * x + m[6]! * y + m[10]! * z + m[14]!) * metresPerUnit;
			let pz = (m[1]! * x + m[5]! * y + m[9]! * z + m[13]!) * metresPerUnit;
			if (move) {
				const [qx, qy, qz] = [px, py, pz];
				px = move[0]! * qx + move[1]! * qy + move[2]! * qz + move[3]!;
				py = move[4]! * qx + move[5]! * qy + move[6]! * qz + move[7]!;
				pz = move[8]! * qx + move[9]! * qy + move[10]! * qz + move[11]!;
			}
			// Written so that NaN fails too.
			if (!(Math.abs(px) <= FARTHEST_M && Math.abs(py) <= FARTHEST_M && Math.abs(pz) <= FARTHEST_M)) isSound = false;
			xyzM[vertex * 3] = px;
			xyzM[vertex * 3 + 1] = py;
			xyzM[vertex * 3 + 2] = pz;
			vertex++;
		}
		for (const local of indices) {
			if (first + local >= vertex) isSound = false;
			triangles[index++] = first + local;
		}
	}
	return { xyzM, triangles, isSound };
}
