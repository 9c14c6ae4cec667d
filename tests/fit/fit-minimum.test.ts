import { describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput, FitResult } from '#shared/fit/fit-schema.ts';
import { turnAfter } from '#shared/geometry/rotation.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { surveyScene, type Triple } from './survey-scene.ts';

/** The objective written down once more, without any of the engine, and minimised by brute force. */

/** Σ rᵀ·Σ⁻¹·r with Σ = C_control + s²·R·C_survey·Rᵀ; by Gaussian elimination. */
function objective(input: FitInput, rotation: ArrayLike<number>, scale: number, shift: readonly number[]): number {
	let sum = 0;
	for (const { survey, control, surveySigma, controlSigma } of input.pairs) {
		const m = [0, 1, 2].map((k) => [0, 1, 2].map((l) => scale * rotation[3 * k + l]!));
		const r = [0, 1, 2].map((k) => control[k]! - m[k]!.reduce((total, value, l) => total + value * survey[l]!, 0) - shift[k]!);
		const rows = [0, 1, 2].map((k) => [
			...[0, 1, 2].map((l) =>
				m[k]!.reduce((total, value, j) => total + value * surveySigma![j]! ** 2 * m[l]![j]!, k === l ? controlSigma![k]! ** 2 : 0),
			),
			r[k]!,
		]);
		for (let k = 0; k < 3; k++) {
			for (let below = k + 1; below < 3; below++) {
				const factor = rows[below]![k]! / rows[k]![k]!;
				for (let l = k; l < 4; l++) rows[below]![l]! -= factor * rows[k]![l]!;
			}
			sum += rows[k]![3]! ** 2 / rows[k]![k]!;
		}
	}
	return sum;
}

/** Pattern search from one pose: each unknown up and down, the step halved where nothing helps. */
function search(input: FitInput, start: { rotation: Float64Array; scale: number; shift: number[] }): number {
	const levelled = input.fit.startsWith('levelled');
	const scaled = input.fit.endsWith('scaled');
	let { rotation, scale, shift } = start;
	let value = objective(input, rotation, scale, shift);
	for (let step = 1; step > 1e-7; ) {
		let better = false;
		for (const axis of levelled ? [0, 1, 2, 5, 6] : [0, 1, 2, 3, 4, 5, 6]) {
			if (axis === 6 && !scaled) continue;
			for (const sign of [-1, 1]) {
				const moved = { rotation: rotation.slice(), scale, shift: [...shift] };
				if (axis < 3) moved.shift[axis]! += 10 * sign * step;
				else if (axis < 6)
					turnAfter(moved.rotation, axis === 3 ? sign * step : 0, axis === 4 ? sign * step : 0, axis === 5 ? sign * step : 0);
				else moved.scale *= 1 + sign * step * 0.3;
				const trial = objective(input, moved.rotation, moved.scale, moved.shift);
				if (trial < value) {
					({ rotation, scale, shift } = moved);
					value = trial;
					better = true;
				}
			}
		}
		if (!better) step /= 2;
	}
	return value;
}

function resultOf(input: FitInput): FitResult {
	const outcome = computeFit(input, { findings: false });
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	return outcome.result;
}

/** A scene about the origin, so that the brute force turns it in place, with rough σ of all sizes and sometimes a gross error. */
function roughScene(seed: number, fit: FitInput['fit'], count: number): FitInput {
	const { input, random } = surveyScene(seed, fit, count, { spread: 8 });
	for (const pair of input.pairs) {
		const sigma = (): Triple => [0, 1, 2].map(() => 10 ** (-2.5 + 2.2 * random())) as Triple;
		pair.surveySigma = sigma();
		pair.controlSigma = sigma();
		pair.control = pair.control.map(
			(value, k) => value! - [500_000, 5_400_000, 120][k]! + pair.controlSigma![k]! * 2 * (random() - 0.5),
		) as Triple;
		pair.survey = pair.survey.map((value, k) => value! + pair.surveySigma![k]! * 2 * (random() - 0.5)) as Triple;
		if (random() < 0.15) pair.control = pair.control.map((value) => value! + 6 * (random() - 0.5)) as Triple;
	}
	return input;
}

describe('the minimum', () => {
	it.each(['levelled', 'levelled-scaled', 'free', 'free-scaled'] as const)('%s: no search from anywhere finds a lower objective', (fit) => {
		const random = seededRandom(71);
		for (let seed = 1; seed <= 5; seed++) {
			const input = roughScene(seed, fit, 3 + (seed % 4));
			const result = resultOf(input);
			const found = objective(input, result.rotation.flat(), result.scale, result.translation);
			expect(found).toBeCloseTo(result.varianceFactor! * result.redundancy, 4);
			for (let start = 0; start < 5; start++) {
				const rotation = Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1);
				const free = fit.startsWith('free');
				turnAfter(rotation, free ? 3 * random() : 0, free ? 3 * random() : 0, 6.3 * random());
				expect(search(input, { rotation, scale: 1, shift: [0, 0, 0] })).toBeGreaterThan(found * (1 - 1e-9));
			}
		}
	});

	it('is a stationary point of the objective in which Σ moves along, not of one that holds it still', () => {
		const input = roughScene(5, 'free-scaled', 6);
		const result = resultOf(input);
		const at = (turn: Triple, factor: number): number => {
			const rotation = Float64Array.from(result.rotation.flat());
			turnAfter(rotation, ...turn);
			return objective(input, rotation, result.scale * factor, result.translation);
		};
		const middle = at([0, 0, 0], 1);
		for (const [ahead, back] of [
			[at([1e-4, 0, 0], 1), at([-1e-4, 0, 0], 1)],
			[at([0, 1e-4, 0], 1), at([0, -1e-4, 0], 1)],
			[at([0, 0, 1e-4], 1), at([0, 0, -1e-4], 1)],
			[at([0, 0, 0], 1 + 1e-4), at([0, 0, 0], 1 - 1e-4)],
		] as const) {
			expect(Math.abs(ahead - back)).toBeLessThan(1e-3 * (ahead + back - 2 * middle));
		}
	});
});
