import { describe, expect, it } from 'vitest';
import { fitCovarianceAt } from '#shared/fit/carry-point.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import { planSurvey, type SurveyPlan } from '#shared/fit/plan-survey.ts';
import type { Matrix3 } from '#shared/geometry/frame.ts';
import { controlSigma, surveyScene, surveySigma, type Triple } from './survey-scene.ts';

const shotCovariance = [0, 1, 2].map((k) => [0, 1, 2].map((l) => (k === l ? surveySigma[k]! ** 2 : 0))) as unknown as Matrix3;

function planOf(seed: number): { plan: SurveyPlan; measured: ReturnType<typeof computeFit> } {
	const { input, trueControl } = surveyScene(seed, 'levelled', 5, { noise: 0 });
	return {
		plan: {
			fit: 'levelled',
			targets: trueControl.map((point, i) => ({
				name: `T${i + 1}`,
				place: point,
				controlSigma,
				surveySigma: [0.002, 0.002, 0.003] as Triple,
			})),
			commonM: 0.002,
			checkpoints: [
				{ name: 'near', place: trueControl[0]!, direction: null, toleranceWidthM: 0.02, shotCovariance },
				{ name: 'level', place: trueControl[1]!, direction: [0, 0, 1], toleranceWidthM: 0.02, shotCovariance },
				{ name: 'far', place: [trueControl[0]![0] + 200, trueControl[0]![1], 120], direction: null, toleranceWidthM: null, shotCovariance },
			],
		},
		measured: computeFit(input, { findings: false }),
	};
}

describe('planning a survey', () => {
	it('foretells the uncertainty that the survey then has', () => {
		const { plan, measured } = planOf(6);
		const planned = planSurvey(plan);
		if (!planned.ok || !measured.ok) throw new Error('refused');
		const [near, level, far] = planned.checkpoints;
		const after = fitCovarianceAt(measured.result, surveyScene(6, 'levelled', 5).trueSurvey[1]!);
		expect(level!.fitUncertaintyM / Math.sqrt(after[2]![2]!)).toBeCloseTo(1, 6);
		expect(level!.standardUncertaintyM).toBeCloseTo(Math.hypot(level!.fitUncertaintyM, surveySigma[2], 0.002), 12);
		expect(level!.expandedM).toBeCloseTo(2 * level!.standardUncertaintyM, 12);
		expect(level!.capability).toBeCloseTo(0.02 / (4 * level!.standardUncertaintyM), 12);
		expect(far!.expandedM).toBeGreaterThan(3 * near!.expandedM);
		expect(far!.capability).toBeNull();
		expect(planned.smallestBlunders.map(({ metres }) => metres)).toEqual(
			measured.result.pairs.map(({ smallestBlunder }) => expect.closeTo(smallestBlunder!, 6)),
		);
	});

	it('says which targets would not do', () => {
		const { plan } = planOf(1);
		const one = planSurvey({ ...plan, targets: plan.targets.slice(0, 1) });
		expect(!one.ok && one.refusal.code).toBe('too-few-pairs');
	});
});
