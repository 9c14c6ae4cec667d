import { describe, expect, it } from 'vitest';
import { compareEpochs, type TwiceMeasured } from '#shared/fit/compare-epochs.ts';
import { controlSigma, surveyScene, surveySigma, type Triple } from './survey-scene.ts';

function marksOf(seed: number, count: number): TwiceMeasured[] {
	return surveyScene(seed, 'levelled', count, { spread: 80 }).input.pairs.map(({ name, survey, control }) => ({
		name,
		before: control as Triple,
		after: survey as Triple,
		beforeSigma: controlSigma,
		afterSigma: surveySigma,
	}));
}

describe('two epochs of the control', () => {
	it('calls marks that kept their positions congruent, but for one time in a few hundred', () => {
		let alarms = 0;
		for (let seed = 1; seed <= 300; seed++) {
			const compared = compareEpochs('levelled', marksOf(seed, 6));
			if (!compared.ok) throw new Error(compared.refusal.message);
			if (!compared.comparison.congruent) alarms++;
		}
		expect(alarms).toBeLessThan(6);
	});

	it('names the mark that moved, and by how much', () => {
		for (let seed = 1; seed <= 8; seed++) {
			const marks = marksOf(seed, 7);
			const [x, y, z] = marks[2]!.before;
			// Before less: the mark lay elsewhere, so it moved the other way.
			marks[2]!.before = [x - 0.03, y, z + 0.04];
			const compared = compareEpochs('levelled', marks);
			if (!compared.ok) throw new Error(compared.refusal.message);
			const { congruent, significance, marks: found } = compared.comparison;
			expect(congruent).toBe(false);
			expect(significance).toBeLessThan(0.001);
			expect(found.filter(({ stable }) => !stable).map(({ name }) => name)).toEqual(['T3']);
			expect(Math.abs(found[2]!.movement![0] - 0.03)).toBeLessThan(0.016);
			expect(Math.abs(found[2]!.movement![2] + 0.04)).toBeLessThan(0.03);
			expect(found[2]!.standardised).toBeGreaterThan(3.29);
		}
	});

	it('names nobody where half the marks moved together', () => {
		const marks = marksOf(3, 6);
		for (const i of [0, 1, 2]) marks[i]!.before = marks[i]!.before.map((value, k) => value + (k === 2 ? 0.2 : 0)) as Triple;
		const compared = compareEpochs('levelled', marks);
		expect(compared.ok && compared.comparison.congruent).toBe(false);
		expect(compared.ok && compared.comparison.marks.map(({ stable }) => stable)).toEqual(Array.from({ length: 6 }, () => null));
	});

	it('refuses the least marks, which always agree', () => {
		const compared = compareEpochs('free', marksOf(1, 2));
		expect(!compared.ok && compared.refusal.code).toBe('too-few-pairs');
	});
});
