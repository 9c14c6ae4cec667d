import { runFit } from '#server/cli/fit.ts';
import { fitRefusalCodes } from '#shared/fit/fit-schema.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

/** Inputs that nobody meant: every one is answered by finite numbers or refused with a code. */

const odd = [0, -0, 1, -1, 1e-300, 1e-12, 1e-6, 1e6, 5e6, 1e15, 1e59, 1e61, 1e300, Number.MAX_VALUE, Number.MIN_VALUE, 0.1, 1 / 3];
const strange: unknown[] = [null, '', 'NaN', 'Infinity', '1', true, [], {}, [1], [1, 2, 3, 4], { survey: 1 }];

/** An input that nobody meant, of the shape of `fit` or nearly so. */
export function hostileInput(random: () => number): unknown {
	const pick = <T>(list: readonly T[]): T => list[Math.floor(random() * list.length)]!;
	const rare = random() < 0.3;
	const base = Array.from({ length: 3 }, () => (random() < 0.5 ? 0 : pick([1e3, 5e6])));
	const span = 10 ** (8 * random() - 4);
	const number = (): unknown => (rare && random() < 0.05 ? pick(strange) : random() < 0.05 ? pick(odd) : span * (random() - 0.5));
	const shape = pick(['cloud', 'plane', 'line', 'place', 'same']);
	const vector = (): unknown => {
		if (rare && random() < 0.03) return pick(strange);
		const along = random();
		return [0, 1, 2].map((k) => {
			if (shape === 'line') return base[k]! + span * along * (k + 1);
			if (shape === 'place') return base[k];
			if (shape === 'plane' && k === 2) return base[k];
			const value = number();
			return typeof value === 'number' ? base[k]! + value : value;
		});
	};
	const sigmas = pick(['none', 'all', 'all', 'some', 'weight']);
	const sigma = (): unknown =>
		random() < 0.02 ? pick(strange) : [0, 1, 2].map(() => (random() < 0.05 ? pick(odd) : 10 ** (-4 * random())));
	const pairs = Array.from({ length: Math.floor(7 * random()) }, (_, i) => {
		const survey = vector();
		const pair: Record<string, unknown> = { name: random() < 0.02 ? 'T1' : `T${i}`, survey, control: shape === 'same' ? survey : vector() };
		if (sigmas === 'all' || (sigmas === 'some' && random() < 0.5)) {
			pair.surveySigma = sigma();
			pair.controlSigma = sigma();
		}
		if (sigmas === 'weight') pair.weight = random() < 0.1 ? pick(odd) : random();
		if (random() < 0.1) pair.heldBack = true;
		return pair;
	});
	return {
		fit: random() < 0.02 ? pick(strange) : pick(['height', 'levelled', 'levelled-scaled', 'free', 'free-scaled']),
		pairs: random() < 0.01 ? pick(strange) : pairs,
		...(random() < 0.2 ? { knownScale: pick(odd) } : {}),
		...(random() < 0.3 ? { station: vector() } : {}),
		...(random() < 0.3 ? { carry: [{ name: 'P', survey: vector(), ...(random() < 0.5 ? { surveySigma: sigma() } : {}) }] } : {}),
		...(random() < 0.1 ? { confidence: pick(odd) } : {}),
	};
}

function onlyFinite(value: unknown): boolean {
	if (typeof value === 'number') return Number.isFinite(value);
	return value === null || typeof value !== 'object' || Object.values(value).every(onlyFinite);
}

/**
 * Puts the input of this seed through the command line's `fit`.
 * @returns whether it was answered or refused; what is wrong otherwise: an exception, a number that is not finite, a refusal without a code
 */
export function tryHostile(seed: number): 'answered' | 'refused' | { fault: string } {
	const text = JSON.stringify(hostileInput(seededRandom(seed)));
	try {
		const { exitCode, output } = runFit(text);
		if (exitCode === 0) return onlyFinite(output) ? 'answered' : { fault: `not finite: ${text}` };
		const { error } = output as { error: { code: (typeof fitRefusalCodes)[number]; message: string } };
		return fitRefusalCodes.includes(error.code) && error.message.length >= 5 ? 'refused' : { fault: JSON.stringify([error, text]) };
	} catch (error) {
		return { fault: `${error}: ${text}` };
	}
}
