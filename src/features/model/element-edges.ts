/** The edges of many bodies that share one mesh, each segment with the body it belongs to. */
export interface ElementEdges {
	/** x, y, z of the two ends of each segment. */
	readonly positions: Float32Array;
	/** The element's running number, once for each end. */
	readonly elements: Float32Array;
}

/** Corners of one element that lie within a tenth of a millimetre are one; open addressing over whole tenths. */
function weld(positions: ArrayLike<number>, elementOf: ArrayLike<number>): Uint32Array {
	const count = elementOf.length;
	const sameAs = new Uint32Array(count);
	let size = 16;
	while (size < 2 * count) size *= 2;
	const slots = new Int32Array(size).fill(-1);
	const steps = new Int32Array(3 * count);
	for (let i = 0; i < 3 * count; i++) steps[i] = Math.round(positions[i]! * 1e4);
	for (let vertex = 0; vertex < count; vertex++) {
		const [x, y, z, element] = [steps[3 * vertex]!, steps[3 * vertex + 1]!, steps[3 * vertex + 2]!, elementOf[vertex]!];
		let slot = (Math.imul(x, 73856093) ^ Math.imul(y, 19349663) ^ Math.imul(z, 83492791) ^ Math.imul(element, 2654435761)) & (size - 1);
		for (;;) {
			const other = slots[slot]!;
			if (other === -1) {
				slots[slot] = vertex;
				sameAs[vertex] = vertex;
				break;
			}
			if (steps[3 * other] === x && steps[3 * other + 1] === y && steps[3 * other + 2] === z && elementOf[other] === element) {
				sameAs[vertex] = other;
				break;
			}
			slot = (slot + 1) & (size - 1);
		}
	}
	return sameAs;
}

/** Unit normals, three numbers a triangle; zero where a triangle has no area. */
function normalsOf(positions: ArrayLike<number>, index: ArrayLike<number>): Float64Array {
	const normals = new Float64Array(index.length);
	for (let corner = 0; corner < index.length; corner += 3) {
		const [a, b, c] = [3 * index[corner]!, 3 * index[corner + 1]!, 3 * index[corner + 2]!];
		const [ux, uy, uz] = [positions[b]! - positions[a]!, positions[b + 1]! - positions[a + 1]!, positions[b + 2]! - positions[a + 2]!];
		const [vx, vy, vz] = [positions[c]! - positions[a]!, positions[c + 1]! - positions[a + 1]!, positions[c + 2]! - positions[a + 2]!];
		const [x, y, z] = [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
		const length = Math.hypot(x, y, z);
		if (length === 0) continue;
		normals.set([x / length, y / length, z / length], corner);
	}
	return normals;
}

/**
 * The edges to draw: where one triangle ends, or where two meet at more than `leastAngleDeg`.
 *
 * Like three's EdgesGeometry, but bodies are kept apart and each segment knows its own, so that one element can be put away without building anew.
 * Positions in metres, any frame; `index` three corners a triangle; `elementOf` one number a corner.
 */
export function elementEdges(
	positions: ArrayLike<number>,
	index: ArrayLike<number>,
	elementOf: ArrayLike<number>,
	leastAngleDeg: number,
): ElementEdges {
	const sameAs = weld(positions, elementOf);
	const normals = normalsOf(positions, index);
	const flatCosine = Math.cos((leastAngleDeg * Math.PI) / 180);
	const vertexCount = elementOf.length;
	/** From an edge's two corners to the triangle that waits for its neighbour; −1 once it has met it. */
	const waiting = new Map<number, number>();
	const drawn: number[] = [];
	for (let triangle = 0; triangle < index.length; triangle += 3) {
		for (let side = 0; side < 3; side++) {
			const a = sameAs[index[triangle + side]!]!;
			const b = sameAs[index[triangle + ((side + 1) % 3)]!]!;
			if (a === b) continue;
			const key = a < b ? a * vertexCount + b : b * vertexCount + a;
			const other = waiting.get(key);
			if (other === undefined) {
				waiting.set(key, triangle);
			} else if (other >= 0) {
				waiting.set(key, -1);
				const cosine =
					normals[triangle]! * normals[other]! +
					normals[triangle + 1]! * normals[other + 1]! +
					normals[triangle + 2]! * normals[other + 2]!;
				if (cosine <= flatCosine) drawn.push(a, b);
			}
		}
	}
	for (const [key, triangle] of waiting) if (triangle >= 0) drawn.push(Math.floor(key / vertexCount), key % vertexCount);
	const ends = new Float32Array(3 * drawn.length);
	const elements = new Float32Array(drawn.length);
	drawn.forEach((vertex, end) => {
		for (let axis = 0; axis < 3; axis++) ends[3 * end + axis] = positions[3 * vertex + axis]!;
		elements[end] = elementOf[vertex]!;
	});
	return { positions: ends, elements };
}
