/** Kronrod's 15 nodes on [0, 1) by symmetry, their weights, and the weights of Gauss's 7 (every second node); QUADPACK, Piessens et al. 1983. */
const nodes = [
	0.991455371120812639206854697526329, 0.949107912342758524526189684047851, 0.864864423359769072789712788640926,
	0.741531185599394439863864773280788, 0.58608723546769113029414469169352, 0.405845151377397166906606412076961,
	0.207784955007898467600689403773245, 0,
];
const kronrodWeights = [
	0.022935322010529224963732008058970, 0.063092092629978553290700663189204, 0.104790010322250183839876322541518,
	0.140653259715525918745189590510238, 0.16900472663926790282829543641693, 0.190350578064785409913256402421014,
	0.204432940075298892414161999234649, 0.209482141084727828012999174891714,
];
const gaussWeights = [0.12948496616886969327061143267787, 0.279705391489276667901467771423780, 0.381830050505118944950369775488975, 0.417959183673469387755102040816327];

function kronrod(integrand: (x: number) => number, from: number, to: number): { integral: number; error: number } {
	const middle = (from + to) / 2;
	const half = (to - from) / 2;
	let kronrodSum = 0;
	let gaussSum = 0;
	for (let i = 0; i < 8; i++) {
		const reach = half * nodes[i]!;
		const value = i === 7 ? integrand(middle) : integrand(middle - reach) + integrand(middle + reach);
		kronrodSum += kronrodWeights[i]! * value;
		if (i % 2 === 1) gaussSum += gaussWeights[(i - 1) / 2]! * value;
	}
	return { integral: half * kronrodSum, error: Math.abs(half * (kronrodSum - gaussSum)) };
}

/**
 * The integral of a smooth function over pieces between given breaks, each halved until the difference of Gauss's 7 and Kronrod's 15 points
 * (which overestimates the error by far) is under the tolerance, at most 40 times.
 * The breaks must say where the function changes quickly: what lies wholly between two nodes cannot be seen.
 */
export function integrateBetween(integrand: (x: number) => number, breaks: readonly number[], tolerance: number): number {
	let sum = 0;
	const sorted = [...breaks].sort((a, b) => a - b);
	const share = tolerance / Math.max(1, sorted.length - 1);
	const halve = (from: number, to: number, depth: number): number => {
		const { integral, error } = kronrod(integrand, from, to);
		const middle = (from + to) / 2;
		if (error <= share || depth === 0 || middle <= from || middle >= to) return integral;
		return halve(from, middle, depth - 1) + halve(middle, to, depth - 1);
	};
	for (let i = 1; i < sorted.length; i++) if (sorted[i]! > sorted[i - 1]!) sum += halve(sorted[i - 1]!, sorted[i]!, 40);
	return sum;
}
