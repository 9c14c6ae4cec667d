import { inverse, Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { adjustSetups } from '#shared/fit/adjust-setups.ts';
import { carryPoint, fitCovarianceBetween } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { KnownMark, MarkSighting, SetupSightings } from '#shared/fit/start-setups.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

/** Two levelled set-ups; "A" sees four known marks and three ties, "B" one known mark and the ties. */

type Triple = [number, number, number];
const seen: Triple = [0.002, 0.003, 0.0015];
const given: Triple = [0.0015, 0.0025, 0.004];
const truth: Record<string, Triple> = {
	K1: [0, 0, 1],
	K2: [30, 4, 2],
	K3: [25, 30, 0],
	K4: [-5, 28, 3],
	X1: [40, 10, 4],
	X2: [45, 25, 1],
	X3: [38, -12, 2],
};
const views: Record<string, { yaw: number; shift: Triple; marks: string[] }> = {
	A: { yaw: 0.7, shift: [12, 9, 1.5], marks: ['K1', 'K2', 'K3', 'K4', 'X1', 'X2', 'X3'] },
	B: { yaw: -2.1, shift: [50, 5, 2], marks: ['K2', 'X1', 'X2', 'X3'] },
};

function scene(seed: number, noise = 1): { setups: SetupSightings[]; known: KnownMark[] } {
	const random = seededRandom(seed);
	const normal = () => Array.from({ length: 12 }, random).reduce((sum, value) => sum + value, -6);
	const known = ['K1', 'K2', 'K3', 'K4'].map((mark) => ({
		mark,
		control: truth[mark]!.map((value, k) => value + noise * given[k]! * normal()) as Triple,
		sigma: given,
	}));
	const setups = Object.entries(views).map(([name, { yaw, shift, marks }]) => ({
		name,
		fit: 'levelled' as const,
		sightings: marks.map((mark): MarkSighting => {
			const d = truth[mark]!.map((value, k) => value - shift[k]!) as Triple;
			const at = [Math.cos(yaw) * d[0] + Math.sin(yaw) * d[1], -Math.sin(yaw) * d[0] + Math.cos(yaw) * d[1], d[2]];
			return { mark, survey: at.map((value, k) => value + noise * seen[k]! * normal()) as Triple, sigma: seen };
		}),
	}));
	return { setups, known };
}

/** The joint objective with the marks at their best places for these poses, written plainly: pose = yaw, shift for each set-up. */
function objective(poses: readonly number[], setups: readonly SetupSightings[], known: readonly KnownMark[]): number {
	let total = 0;
	for (const mark of Object.keys(truth)) {
		const normal = Matrix.zeros(3, 3);
		const right = Matrix.zeros(3, 1);
		let square = 0;
		const add = (covariance: Matrix, at: Matrix) => {
			const weight = inverse(covariance);
			normal.add(weight);
			right.add(weight.mmul(at));
			square += at.transpose().mmul(weight).mmul(at).get(0, 0);
		};
		for (const { control, sigma } of known.filter((one) => one.mark === mark))
			add(Matrix.diag(sigma.map((value) => value ** 2)), Matrix.columnVector(control.map(Number)));
		setups.forEach(({ sightings }, i) => {
			const [yaw, ...shift] = poses.slice(4 * i, 4 * i + 4) as Triple;
			const r = new Matrix([
				[Math.cos(yaw), -Math.sin(yaw), 0],
				[Math.sin(yaw), Math.cos(yaw), 0],
				[0, 0, 1],
			]);
			for (const { survey, sigma } of sightings.filter((one) => one.mark === mark)) {
				const at = r.mmul(Matrix.columnVector([...survey])).add(Matrix.columnVector(shift));
				add(r.mmul(Matrix.diag(sigma.map((value) => value ** 2))).mmul(r.transpose()), at);
			}
		});
		total += square - right.transpose().mmul(solve(normal, right)).get(0, 0);
	}
	return total;
}

/** Newton's steps with differences of the objective alone. */
function bruteMinimum(start: readonly number[], value: (at: readonly number[]) => number): { at: number[]; hessian: Matrix } {
	let at = [...start];
	const step = start.map((_, i) => (i % 4 === 0 ? 3e-5 : 1e-3));
	const moved = (...moves: [number, number][]) =>
		value(moves.reduce((place, [i, by]) => place.map((one, k) => (k === i ? one + by * step[i]! : one)), at));
	let hessian = Matrix.zeros(at.length, at.length);
	for (let round = 0; round < 6; round++) {
		const middle = value(at);
		const gradient = Matrix.columnVector(at.map((_, i) => (moved([i, 1]) - moved([i, -1])) / (2 * step[i]!)));
		hessian = new Matrix(
			at.map((_, i) =>
				at.map((_other, j) =>
					i === j
						? (moved([i, 1]) - 2 * middle + moved([i, -1])) / step[i]! ** 2
						: (moved([i, 1], [j, 1]) - moved([i, 1], [j, -1]) - moved([i, -1], [j, 1]) + moved([i, -1], [j, -1])) /
							(4 * step[i]! * step[j]!),
				),
			),
		);
		const change = solve(hessian, gradient);
		at = at.map((one, i) => one - change.get(i, 0));
	}
	return { at, hessian };
}

const startOf = () => Object.values(views).flatMap(({ yaw, shift }) => [yaw, ...shift]);

describe('the joint minimum', () => {
	it('is where the plain objective is least, and its covariance what the objective’s curvature says, between set-ups too', () => {
		for (const seed of [1, 2, 3]) {
			const { setups, known } = scene(seed);
			const joint = adjustSetups(setups, known);
			if (!joint.ok) throw new Error(joint.refusal.message);
			const brute = bruteMinimum(startOf(), (at) => objective(at, setups, known));
			expect(joint.adjusted.chiSquare!.statistic).toBeCloseTo(objective(brute.at, setups, known), 5);
			const cofactor = inverse(brute.hessian).mul(2);
			setups.forEach(({ name }, i) => {
				const { fit } = joint.adjusted.fits.find(({ setup }) => setup === name)!;
				const [yaw, e, n, h] = brute.at.slice(4 * i, 4 * i + 4) as [number, number, number, number];
				const point: Triple = [8, -3, 1];
				const expected = [Math.cos(yaw) * 8 + Math.sin(yaw) * 3 + e, Math.sin(yaw) * 8 - Math.cos(yaw) * 3 + n, 1 + h];
				carryPoint(fit, point).forEach((value, k) => {
					expect(Math.abs(value - expected[k]!)).toBeLessThan(2e-6);
				});
			});
			// Covariance of a place in A and one in B by the yaw-and-shift poses of the plain objective.
			const jacobian = (i: number, [x, y]: Triple): Matrix => {
				const yaw = brute.at[4 * i]!;
				const rows = Matrix.zeros(3, 8);
				[-Math.sin(yaw) * x - Math.cos(yaw) * y, Math.cos(yaw) * x - Math.sin(yaw) * y].forEach((value, k) => {
					rows.set(k, 4 * i, value);
				});
				for (let k = 0; k < 3; k++) rows.set(k, 4 * i + 1 + k, 1);
				return rows;
			};
			const [p, q]: [Triple, Triple] = [
				[12, 4, 1],
				[-6, 15, 0],
			];
			const plain = jacobian(0, p).mmul(cofactor).mmul(jacobian(1, q).transpose());
			const { between, fits } = joint.adjusted;
			expect(between).toHaveLength(1);
			const fitOf = (name: string) => fits.find(({ setup }) => setup === name)!.fit;
			const block = between[0]!;
			const [a, b] = [block.a, block.b].map((name) => ({ fit: fitOf(name), point: name === 'A' ? p : q }));
			const ours = fitCovarianceBetween(a!.fit, a!.point, b!.point, { fit: b!.fit, covariance: block.covariance });
			const size = plain.get(0, 0);
			for (let k = 0; k < 3; k++)
				for (let l = 0; l < 3; l++) {
					const value = block.a === 'A' ? ours[k]![l]! : ours[l]![k]!;
					expect(Math.abs(value - plain.get(k, l))).toBeLessThan(2e-3 * size);
				}
		}
	});

	it('is each set-up’s own fit where no mark is tied to another', () => {
		const { setups, known } = scene(4);
		const [a] = setups as [SetupSightings];
		const own = known.map((mark) => ({ ...mark, mark: `${mark.mark}b`, control: mark.control.map((value) => value! + 1) as Triple }));
		const b = {
			...a,
			name: 'B',
			sightings: a.sightings.slice(0, 4).map((sighting) => ({ ...sighting, mark: `${sighting.mark}b` })),
		};
		const joint = adjustSetups([a, b], [...known, ...own]);
		if (!joint.ok) throw new Error(joint.refusal.message);
		for (const [setup, marks] of [
			[a, known],
			[b, own],
		] as const) {
			const pairs = marks.map(({ mark, control, sigma: controlSigma }) => {
				const { survey, sigma: surveySigma } = setup.sightings.find((one) => one.mark === mark)!;
				return { name: mark, survey, control, surveySigma, controlSigma };
			});
			const single = computeFit({ fit: 'levelled', pairs: structuredClone(pairs) as never }, { findings: false });
			const { fit } = joint.adjusted.fits.find((one) => one.setup === setup.name)!;
			if (!single.ok) throw new Error(single.refusal.message);
			carryPoint(fit, [3, 4, 5]).forEach((value, k) => {
				expect(Math.abs(value - carryPoint(single.result, [3, 4, 5])[k]!)).toBeLessThan(1e-7);
			});
			expect(Math.abs(fit.rms - single.result.rms)).toBeLessThan(1e-7);
			expect(fit.pairs.map(({ name }) => name).sort()).toEqual(marks.map(({ mark }) => mark).sort());
			for (const pair of fit.pairs) {
				const other = single.result.pairs.find(({ name }) => name === pair.name)!;
				pair.residual.forEach((value, k) => {
					expect(Math.abs(value! - other.residual[k]!)).toBeLessThan(1e-7);
				});
			}
		}
		for (const { covariance } of joint.adjusted.between) for (const value of covariance.flat()) expect(Math.abs(value)).toBeLessThan(1e-15);
	});

	it('says how sure it is: the scatter of repeated surveys, in each set-up and between them', () => {
		const p: Triple = [12, 4, 1];
		const errors: { a: number; b: number }[] = [];
		let expected = { a: 0, b: 0, ab: 0 };
		const runs = 1500;
		for (let seed = 100; seed < 100 + runs; seed++) {
			const { setups, known } = scene(seed);
			const joint = adjustSetups(setups, known);
			if (!joint.ok) throw new Error(joint.refusal.message);
			const { fits, between } = joint.adjusted;
			const fitOf = (name: string) => fits.find(({ setup }) => setup === name)!.fit;
			const off = (name: string) => {
				const { yaw, shift } = views[name]!;
				return carryPoint(fitOf(name), p)[0] - (Math.cos(yaw) * p[0] - Math.sin(yaw) * p[1] + shift[0]);
			};
			errors.push({ a: off('A'), b: off('B') });
			const [block] = between;
			const [first, second] = [fitOf(block!.a), fitOf(block!.b)];
			expected = {
				a: expected.a + fitCovarianceBetween(fitOf('A'), p, p)[0][0] / runs,
				b: expected.b + fitCovarianceBetween(fitOf('B'), p, p)[0][0] / runs,
				ab: expected.ab + fitCovarianceBetween(first, p, p, { fit: second, covariance: block!.covariance })[0][0] / runs,
			};
		}
		const mean = (of: (one: { a: number; b: number }) => number) => errors.reduce((sum, one) => sum + of(one), 0) / runs;
		// Standard error of a variance over 1500 runs is 3.7 %.
		expect(Math.abs(mean(({ a }) => a * a) / expected.a - 1)).toBeLessThan(0.15);
		expect(Math.abs(mean(({ b }) => b * b) / expected.b - 1)).toBeLessThan(0.15);
		expect(Math.abs(mean(({ a, b }) => a * b) - expected.ab)).toBeLessThan(0.15 * Math.sqrt(expected.a * expected.b));
		expect(expected.ab).toBeGreaterThan(0.2 * expected.a);
	});

	it('takes benchmarks, targets used in part, and compares held-back marks', () => {
		const { setups, known } = scene(5);
		const bench = known.map((mark) =>
			mark.mark === 'K3' ? { ...mark, control: [null, null, mark.control[2]] as [null, null, number] } : mark,
		);
		const [a, b] = setups as [SetupSightings, SetupSightings];
		const marked = {
			...a,
			sightings: a.sightings.map((one) => ({
				...one,
				...(one.mark === 'X2' ? { use: 'plan' as const } : {}),
				isHeldBack: one.mark === 'K4',
			})),
		};
		const joint = adjustSetups([marked, b], bench);
		if (!joint.ok) throw new Error(joint.refusal.message);
		// Rows: A 5·3 + 2 and B 4·3 sightings, control 2·3 + 1; unknowns: 8 of the poses, 3 for each of K1, K2, K3, X1, X2, X3.
		expect(joint.adjusted.redundancy).toBe(17 + 12 + 7 - 8 - 18);
		const fit = joint.adjusted.fits.find(({ setup }) => setup === 'A')!.fit;
		const k3 = fit.pairs.find(({ name }) => name === 'K3')!;
		expect(k3.residual.map((value) => value === null)).toEqual([true, true, false]);
		const held = fit.pairs.find(({ name }) => name === 'K4')!;
		expect(held.heldBack).toBe(true);
		expect(held.normalised).toBeLessThan(3.29);
		expect(joint.adjusted.marks.map(({ mark }) => mark)).not.toContain('K4');
		const moved = adjustSetups(
			[
				{ ...b, sightings: b.sightings.map((one) => ({ ...one, isHeldBack: false })) },
				{
					...marked,
					sightings: marked.sightings.map((one) =>
						one.mark === 'K4' ? { ...one, survey: [one.survey[0] + 0.05, one.survey[1], one.survey[2]] as Triple } : one,
					),
				},
			],
			bench,
		);
		expect(
			moved.ok && moved.adjusted.fits.find(({ setup }) => setup === 'A')!.fit.pairs.find(({ heldBack }) => heldBack)!.normalised,
		).toBeGreaterThan(5);
	});

	it('names a tie that one set-up sighted wrongly, and nothing in clean networks', () => {
		let alarms = 0;
		for (let seed = 1; seed <= 200; seed++) {
			const { setups, known } = scene(seed);
			const joint = adjustSetups(setups, known);
			if (joint.ok && joint.adjusted.fits.some(({ fit }) => fit.findings.length > 0)) alarms++;
		}
		expect(alarms).toBeLessThan(5);
		const { setups, known } = scene(6);
		const [a, b] = setups as [SetupSightings, SetupSightings];
		const wrong = {
			...b,
			sightings: b.sightings.map((one) =>
				one.mark === 'X1' ? { ...one, survey: [one.survey[0] + 0.04, one.survey[1], one.survey[2]] as Triple } : one,
			),
		};
		const joint = adjustSetups([a, wrong], known);
		if (!joint.ok) throw new Error(joint.refusal.message);
		expect(joint.adjusted.fits.flatMap(({ fit }) => fit.findings.flatMap(({ pairs }) => pairs))).toContain('X1');
		expect(joint.adjusted.chiSquare!.passes).toBe(false);
	});
});
