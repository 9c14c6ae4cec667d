import type { UnnamedPoint } from '#shared/fit/match-unnamed.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

/** The inputs of the measurements: the same numbers to the last bit on every machine and in every language (no logarithm, no sine). */

/** Survey and control coordinates of `count` pairs, 3·count numbers each, metres, not reduced. */
export interface SeededPairs {
	count: number;
	survey: Float64Array;
	control: Float64Array;
}

/** Of four uniform numbers, left to right: variance 1. */
export function nearlyNormal(random: () => number): number {
	const sum = random() + random() + random() + random();
	return (sum - 2) * Math.sqrt(3);
}

/** Pairs in a box of 60 × 40 × 12 m, any turn and a shift of up to 500 m, 3 mm of noise on the design side. */
export function seededPairs(seed: number, count: number): SeededPairs {
	const random = seededRandom(seed);
	let w = random() - 0.5;
	let a = random() - 0.5;
	let b = random() - 0.5;
	let c = random() - 0.5;
	const length = Math.sqrt(w * w + a * a + b * b + c * c);
	w /= length;
	a /= length;
	b /= length;
	c /= length;
	const rotation = [
		1 - 2 * (b * b + c * c),
		2 * (a * b - w * c),
		2 * (a * c + w * b),
		2 * (a * b + w * c),
		1 - 2 * (a * a + c * c),
		2 * (b * c - w * a),
		2 * (a * c - w * b),
		2 * (b * c + w * a),
		1 - 2 * (a * a + b * b),
	];
	const shift = [(random() - 0.5) * 1000, (random() - 0.5) * 1000, (random() - 0.5) * 1000];
	const survey = new Float64Array(3 * count);
	const control = new Float64Array(3 * count);
	for (let i = 0; i < count; i++) {
		const x = 60 * random();
		const y = 40 * random();
		const z = 12 * random();
		survey[3 * i] = x;
		survey[3 * i + 1] = y;
		survey[3 * i + 2] = z;
		for (let k = 0; k < 3; k++) {
			const turned = rotation[3 * k]! * x + rotation[3 * k + 1]! * y + rotation[3 * k + 2]! * z;
			control[3 * i + k] = turned + shift[k]! + 0.003 * nearlyNormal(random);
		}
	}
	return { count, survey, control };
}

/** Pairs of which every 5th is 0.1 m off in height. */
export function pairsWithBlunders(seed: number, count: number): SeededPairs {
	const pairs = seededPairs(seed, count);
	for (let i = 0; i < count; i += 5) pairs.control[3 * i + 2]! += 0.1;
	return pairs;
}

/** Targets without names, the last quarter of them strangers, and the control they belong to. `truth`: control of each target, −1 for strangers. */
export function seededTargets(
	targetCount: number,
	controlCount: number,
): { targets: UnnamedPoint[]; control: UnnamedPoint[]; truth: number[] } {
	const { survey, control } = seededPairs(8000, controlCount);
	const random = seededRandom(8100);
	const strangers = Math.floor(targetCount / 4);
	const step = Math.floor(controlCount / targetCount);
	const truth: number[] = [];
	const targets = Array.from({ length: targetCount }, (_, i): UnnamedPoint => {
		if (i >= targetCount - strangers) {
			truth.push(-1);
			return { name: `T${i}`, point: [60 * random(), 40 * random(), 12 * random()] };
		}
		const from = i * step;
		truth.push(from);
		return { name: `T${i}`, point: [survey[3 * from]!, survey[3 * from + 1]!, survey[3 * from + 2]!] };
	});
	return {
		targets,
		control: Array.from({ length: controlCount }, (_, j) => ({
			name: `C${j}`,
			point: [control[3 * j]!, control[3 * j + 1]!, control[3 * j + 2]!] as const,
		})),
		truth,
	};
}

const codes = ['COL', 'WAL', 'SLB', 'BLT', 'CP'] as const;

/** A point list as text: name, three coordinates with four decimals, code. */
export function seededPointList(seed: number, count: number): string {
	const random = seededRandom(seed);
	const lines = ['name,easting,northing,height,code'];
	for (let k = 0; k < count; k++) {
		const easting = (412_000 + 100 * random()).toFixed(4);
		const northing = (5_412_000 + 100 * random()).toFixed(4);
		const height = (40 + 20 * random()).toFixed(4);
		lines.push(`P${String(k).padStart(6, '0')},${easting},${northing},${height},${codes[Math.floor(5 * random())]}`);
	}
	return `${lines.join('\n')}\n`;
}

/** Triples by chance as they are drawn, three indices each; those in which two are equal are passed over. */
export function seededTriples(seed: number, draws: number, count: number): Int32Array {
	const random = seededRandom(seed);
	const triples: number[] = [];
	for (let k = 0; k < draws; k++) {
		const i = Math.floor(count * random());
		const j = Math.floor(count * random());
		const l = Math.floor(count * random());
		if (i !== j && j !== l && i !== l) triples.push(i, j, l);
	}
	return Int32Array.from(triples);
}
