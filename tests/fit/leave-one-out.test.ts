import { describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput } from '#shared/fit/fit-schema.ts';
import { surveyScene, type Triple } from './survey-scene.ts';

/** The misfit against a fit that never saw the pair: by holding it back. */
function byHoldingBack(input: FitInput, name: string): readonly (number | null)[] {
	const outcome = computeFit(
		{ ...input, pairs: input.pairs.map((pair) => ({ ...pair, heldBack: pair.name === name })) },
		{ findings: false },
	);
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	return outcome.result.pairs.find((pair) => pair.name === name)!.residual;
}

describe('leave one out', () => {
	it.each([
		['levelled', 5, 0],
		['free', 6, 0.4],
		['levelled-scaled', 30, 0],
		['free', 40, 0],
		['free-scaled', 25, 0.6],
	] as const)('%s with %i pairs and a gross error of %f m: is a full new fit of the others', (fit, count, error) => {
		const { input } = surveyScene(count, fit, count);
		input.pairs[1]!.control = input.pairs[1]!.control.map((value) => value! + error) as Triple;
		const outcome = computeFit(input, { findings: false });
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		for (const { name, leaveOneOut } of outcome.result.pairs) {
			byHoldingBack(input, name).forEach((value, k) => {
				expect(Math.abs(leaveOneOut![k]! - value!)).toBeLessThan(1e-7);
			});
		}
	});

	it('is null where the others do not determine the fit', () => {
		const { input } = surveyScene(1, 'free', 3);
		const outcome = computeFit(input, { findings: false });
		expect(outcome.ok && outcome.result.pairs.map(({ leaveOneOut }) => leaveOneOut)).toEqual([null, null, null]);
		const line = Array.from({ length: 14 }, (_, i): Triple => [i, i === 13 ? 5 : 0, 0]);
		const corner = computeFit(
			{ fit: 'free', pairs: line.map((point, i) => ({ name: `T${i}`, survey: point, control: point })) },
			{ findings: false },
		);
		expect(corner.ok && corner.result.pairs[13]!.leaveOneOut).toBeNull();
		expect(corner.ok && corner.result.pairs[2]!.leaveOneOut).not.toBeNull();
	});
});
