import { describe, expect, it } from 'vitest';
import { runFit } from '#server/cli/fit.ts';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitInput } from '#shared/fit/fit-schema.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';
import { surveyScene, type Triple } from './survey-scene.ts';

function refusalOf(value: unknown): { code: string; where?: string | undefined } {
	const read = readFitInput(value);
	if (!read.ok) return read.refusal;
	const outcome = computeFit(read.input);
	if (outcome.ok) throw new Error('not refused');
	expect(outcome.refusal.message.length).toBeGreaterThan(10);
	return outcome.refusal;
}

const scene = (): FitInput => structuredClone(surveyScene(1, 'free', 4).input);
const plain = (): FitInput => structuredClone(surveyScene(1, 'free', 4, { sigmas: false }).input);
const points = (...at: Triple[]): FitInput['pairs'] => at.map((point, i) => ({ name: `T${i}`, survey: point, control: point }));

describe('refusals', () => {
	it.each<[string, string, unknown, string?]>([
		['no object', 'bad-input', 7],
		['a fit that does not exist', 'bad-input', { ...scene(), fit: 'affine' }, 'fit'],
		['a pair without a name', 'bad-input', { ...plain(), pairs: [{ survey: [1, 2, 3], control: [1, 2, 3] }] }, 'pairs[0].name'],
		['two numbers', 'bad-input', { ...plain(), pairs: [{ name: 'A', survey: [1, 2], control: [1, 2, 3] }] }, 'pairs[0].survey'],
		[
			'null in a free fit',
			'not-finite',
			{ ...plain(), pairs: [{ name: 'A', survey: [1, null, 3], control: [1, 2, 3] }] },
			'pairs[0].survey[1]',
		],
		['"NaN"', 'not-finite', { ...plain(), pairs: [{ name: 'A', survey: [1, 2, 3], control: [1, 2, 'NaN'] }] }, 'pairs[0].control[2]'],
		['overflow', 'not-finite', { ...plain(), pairs: points([1e200, 0, 0], [0, 1, 0], [0, 0, 1]) }, 'pairs[0].survey[0]'],
		['a name twice', 'duplicate-name', { ...plain(), pairs: [...plain().pairs, plain().pairs[0]] }, 'pairs[4].name'],
		['no pairs', 'too-few-pairs', { fit: 'free', pairs: [] }],
		['two pairs of a free fit', 'too-few-pairs', { ...plain(), pairs: plain().pairs.slice(0, 2) }],
		[
			'held back pairs count for nothing',
			'too-few-pairs',
			{ ...plain(), pairs: plain().pairs.map((pair, i) => ({ ...pair, heldBack: i > 1 })) },
		],
		['one place', 'no-spread', { fit: 'free', pairs: points([1, 2, 3], [1, 2, 3], [1, 2, 3]) }],
		['a line', 'on-a-line', { fit: 'free', pairs: points([0, 0, 0], [1, 2, 3], [2, 4, 6], [3, 6, 9]) }],
		['a column, levelled', 'on-a-line', { fit: 'levelled', pairs: points([0, 0, 0], [0, 0, 7], [0, 0, 9]) }],
		[
			'a negative σ',
			'bad-sigma',
			{ ...scene(), pairs: scene().pairs.map((pair) => ({ ...pair, surveySigma: [0.1, -0.1, 0.1] })) },
			'pairs[0].surveySigma[1]',
		],
		[
			'σ zero on both sides',
			'bad-sigma',
			{ ...scene(), pairs: scene().pairs.map((pair) => ({ ...pair, surveySigma: [0, 1, 1], controlSigma: [0, 1, 1] })) },
		],
		['σ on one side', 'bad-sigma', { ...plain(), pairs: plain().pairs.map((pair) => ({ ...pair, surveySigma: [1, 1, 1] })) }],
		['σ of some pairs', 'bad-sigma', { ...scene(), pairs: [...scene().pairs.slice(0, 3), { ...plain().pairs[3], name: 'X' }] }],
		['σ and weights', 'bad-sigma', { ...scene(), pairs: scene().pairs.map((pair) => ({ ...pair, weight: 1 })) }],
		['a weight of zero', 'bad-input', { ...plain(), pairs: plain().pairs.map((pair) => ({ ...pair, weight: 0 })) }],
		['a confidence of one', 'bad-input', { ...plain(), confidence: 1 }, 'confidence'],
		['a known scale beside a fitted one', 'bad-input', { ...plain(), fit: 'free-scaled', knownScale: 1.0004 }, 'knownScale'],
	])('%s: %s', (_, code, value, where) => {
		const refusal = refusalOf(value);
		expect(refusal.code).toBe(code);
		if (where) expect(refusal.where).toBe(where);
	});

	it('refuses a square with two axes exchanged, as all bearings fit alike', () => {
		const square: Triple[] = [
			[1, 1, 0],
			[-1, 1, 0],
			[-1, -1, 0],
			[1, -1, 0],
		];
		const pairs = square.map(([x, y, z], i) => ({ name: `T${i}`, survey: [x, y, z] as Triple, control: [y, x, z] as Triple }));
		expect(refusalOf({ fit: 'levelled', pairs }).code).toBe('no-solution');
		const sigma: Triple = [0.01, 0.01, 0.01];
		expect(refusalOf({ fit: 'levelled', pairs: pairs.map((pair) => ({ ...pair, surveySigma: sigma, controlSigma: sigma })) }).code).toBe(
			'no-solution',
		);
		// A free fit turns the square over, exactly.
		const free = computeFit({ fit: 'free', pairs });
		expect(free.ok && free.result.rms).toBeLessThan(1e-12);
	});

	it('allows σ of zero on one side alone', () => {
		const pairs = scene().pairs.map((pair) => ({ ...pair, controlSigma: [0, 0, 0] as Triple }));
		expect(computeFit({ ...scene(), pairs }).ok).toBe(true);
	});

	it('answers text with exit code 2 and never throws', () => {
		for (const text of ['', '{', 'null', '[]', '{"fit":"free","pairs":[{"name":"A","survey":[1e999,0,0],"control":[0,0,0]}]}']) {
			const { exitCode, output } = runFit(text);
			expect(exitCode).toBe(2);
			expect((output as { error: { code: string } }).error.code).toMatch(/^(bad-input|not-finite)$/);
		}
		expect(runFit(JSON.stringify(scene())).exitCode).toBe(0);
	});
});
