import { describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { Shelving } from '#shared/fit/contract.ts';
import type { FitPair, FitResult } from '#shared/fit/fit-schema.ts';
import { curedPairs, shelvedInput } from '#shared/fit/shelved-input.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { curesOf, withCure, worthOf, worthWith } from '#src/features/fit/cures.ts';
import { pairFigures } from '#src/features/fit/pair-figures.ts';
import { withExchange, withPlace } from '#src/features/fit/shelves-state.ts';

type Place = [number, number, number];

/** Pairs that agree to 1 mm, turned and shifted; `spoil` changes the sightings. */
function scene(count: number, spoil: (survey: Place[]) => void = () => {}): FitPair[] {
	const random = seededRandom(4711);
	const normal = () => (random() + random() + random() + random() + random() + random() - 3) * Math.SQRT2 * 0.001;
	const places: Place[] = Array.from({ length: count }, () => [random() * 60, random() * 40, random() * 8]);
	const survey = places.map(([x, y, z]): Place => {
		const [cos, sin] = [Math.cos(0.7), Math.sin(0.7)];
		return [cos * x + sin * y + normal(), cos * y - sin * x + normal(), z - 3 + normal()];
	});
	spoil(survey);
	return places.map((control, i) => ({
		name: `T${i + 1}`,
		control,
		survey: survey[i]!,
		surveySigma: [0.001, 0.001, 0.001],
		controlSigma: [0.0005, 0.0005, 0.0005],
	}));
}

/** The sighting of one target moved, metres. */
const moved =
	(index: number, by: Place) =>
	(survey: Place[]): void => {
		survey[index] = survey[index]!.map((value, axis) => value + by[axis]!) as Place;
	};

const exchanged = (survey: Place[]): void => {
	[survey[1], survey[4]] = [survey[4]!, survey[1]!];
};

function fitted(pairs: FitPair[], shelves: Shelving[] = []): FitResult {
	const outcome = computeFit(shelvedInput(pairs, 'levelled', null, shelves));
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	return outcome.result;
}

describe('the cure that fits a finding', () => {
	it.each([
		['a wrong target height', moved(3, [0, 0, 0.095]), 'Use T4 in plan only'],
		['two exchanged labels', exchanged, 'Exchange T2 and T5'],
		['a blunder', moved(5, [0.04, -0.03, 0.05]), 'Set T6 aside'],
		['a slip in one coordinate', moved(5, [0.1, 0, 0]), 'Set T6 aside'],
	])('is offered first for %s, and its outcome is that of the fit then made', (_, spoil, label) => {
		const pairs = scene(9, spoil);
		const before = fitted(pairs);
		const stories = before.findings.flatMap((finding) => curesOf(finding, 'levelled'));
		const cure = stories[0]?.cures[0];
		expect(cure?.label).toBe(label);
		const said = worthWith(cure!, { pairs, kind: 'levelled', knownScale: null, shelves: [] });
		const after = fitted(pairs, withCure([], cure!, 'Because.'));
		expect(said).toEqual(worthOf(after));
		expect(said!.rmsM).toBeLessThan(before.rms / 4);
		expect(said!.worst!.normalised).toBeLessThan(3.29);
		expect(after.findings).toEqual([]);
	});

	it('names nobody where several stories are as good, and gives each its own presses', () => {
		// Two targets: one is off, and nothing says which.
		const pairs = scene(2, moved(0, [0, 0, 0.05]));
		const accusing = fitted(pairs).findings.filter(({ evidence }) => Array.isArray(evidence.alternatives));
		expect(accusing.length).toBeGreaterThan(0);
		for (const finding of accusing) {
			expect(finding.pairs).toEqual([]);
			const stories = curesOf(finding, 'levelled');
			expect(stories.length).toBeGreaterThan(1);
			for (const { title, cures } of stories) {
				expect(title).toMatch(/\?$/);
				expect(cures.length).toBeGreaterThan(0);
			}
		}
	});

	it('offers no part of a pair where the fit takes none, and no press for what is cured elsewhere', () => {
		const pairs = scene(8, moved(3, [0, 0, 0.095]));
		const [finding] = fitted(pairs).findings;
		expect(curesOf(finding!, 'free').flatMap(({ cures }) => cures.map(({ label }) => label))).toEqual(['Set T4 aside', 'Hold T4 back']);
		expect(curesOf({ code: 'unit-ratio', pairs: [], message: '', evidence: { ratio: 1000 } }, 'levelled')).toEqual([]);
	});
});

describe('shelves', () => {
	it('put exchanged labels back on both sides, and one put back whole frees the other', () => {
		const both = withExchange([], ['T1', 'T2'], 'Labels.');
		expect(both.map(({ name, exchangedWith }) => [name, exchangedWith])).toEqual([
			['T1', 'T2'],
			['T2', 'T1'],
		]);
		expect(withPlace(both, ['T1'], { shelf: 'in-the-fit', use: 'all' }, null)).toEqual([]);
		// A third takes one of them: its partner is free again.
		const third = withExchange(both, ['T2', 'T3'], 'Other labels.');
		expect(third.map(({ name }) => name).sort()).toEqual(['T2', 'T3']);
		// Held back, a pair keeps its exchange.
		const held = withPlace(both, ['T1'], { shelf: 'held-back', use: 'all' }, null);
		expect(held.find(({ name }) => name === 'T1')).toMatchObject({ shelf: 'held-back', exchangedWith: 'T2', reason: 'Labels.' });
	});

	it('change the engine’s input and nothing else: no shelving, no difference', () => {
		const pairs = scene(6);
		expect(shelvedInput(pairs, 'levelled', null, []).pairs).toEqual(pairs.map((pair) => ({ ...pair, heldBack: false })));
		const lopsided: Shelving[] = [{ name: 'T1', shelf: 'in-the-fit', reason: 'x', exchangedWith: 'T2' }];
		expect(curedPairs(pairs, 'levelled', lopsided)[0]!.pair.survey).toEqual(pairs[0]!.survey);
	});

	it('leave a pair in part out of fits that need it whole', () => {
		const pairs = scene(6);
		const planOnly: Shelving[] = [{ name: 'T1', shelf: 'in-the-fit', reason: 'x', use: 'plan' }];
		const names = (kind: 'free' | 'height' | 'levelled') => shelvedInput(pairs, kind, null, planOnly).pairs.map(({ name }) => name);
		expect(names('levelled')).toContain('T1');
		expect(names('free')).not.toContain('T1');
		expect(names('height')).not.toContain('T1');
	});

	it('show what a pair that is set aside would be off by', () => {
		const pairs = scene(8, moved(3, [0, 0, 0.095]));
		const fit = fitted(pairs, [{ name: 'T4', shelf: 'set-aside', reason: 'x' }]);
		expect(pairFigures(pairs, fit).get('T4')!.residualMm[2]).toBeGreaterThan(90);
		expect(pairFigures(pairs, fit).get('T4')!.residualMm[2]).toBeLessThan(100);
	});
});
