/**
 * How often the truth lies within the stated uncertainty: `npx tsx tests/fit/coverage.ts DRAWS`. Each draw is a levelled set-up of six pairs
 * with errors on both sides, a constant part that all its points share (2 mm along each axis), and a shot of its own at a level and a face
 * checkpoint; the check's own U = 2·u is held against the deviation that the check finds where nothing is off. One line a kind: the share
 * within 1.96·u (95 %) and within 2·u (95.45 %).
 */
import { runCheck } from '#shared/check/run-check.ts';
import {
	aCheck,
	aCheckpoint,
	aPoint,
	aSetup,
	at,
	fitOf,
	gaussian,
	pairsOf,
	seeded,
	targetPlaces,
	toSurvey,
	withSigma,
} from '../check/measured-world.ts';

const draws = Number(process.argv[2] ?? 20_000);
const random = seeded(20_251);
// Twelve uniform numbers: the tails beyond two σ are what is asked for, and four have too little there.
const normal = (): number => (gaussian(random) + gaussian(random) + gaussian(random)) / Math.sqrt(3);
const vector = (sigma: readonly number[]): [number, number, number] =>
	[0, 1, 2].map((k) => sigma[k]! * normal()) as [number, number, number];
const pointSigmaM: [number, number, number] = [0.001, 0.001, 0.001];
const commonMm = 2;
const places = [
	aCheckpoint({ id: 'level', mark: 'L', characteristic: 'level', place: at(12, 9, 4), direction: null }),
	aCheckpoint({ id: 'face', mark: 'F', place: at(-6, 20, 2), direction: [0.6, 0.8, 0] }),
];
const within = new Map(places.map(({ id }) => [id, { at95: 0, at2: 0 }]));
for (let draw = 0; draw < draws; draw++) {
	const fit = fitOf({
		fit: 'levelled',
		pairs: pairsOf(targetPlaces, withSigma, () => ({ survey: vector(withSigma.surveySigma!), control: vector(withSigma.controlSigma!) })),
	});
	const shared = vector([commonMm / 1000, commonMm / 1000, commonMm / 1000]);
	const points = places.map(({ mark, place }) => {
		const exact = toSurvey([place[0] + shared[0], place[1] + shared[1], place[2] + shared[2]]);
		const error = vector(pointSigmaM);
		return aPoint(place, { name: mark, surveyPoint: [exact[0] + error[0], exact[1] + error[1], exact[2] + error[2]] });
	});
	// The variance factor's test would widen one draw in forty; what is asked here is the plain U.
	const setups = [aSetup({ fit: { ...fit, chiSquare: null, sigmaGiven: true }, commonMm, pointSigmaM })];
	for (const { checkpointId, deviationMm, expandedUncertaintyMm: uncertaintyMm } of runCheck(
		aCheck({ checkpoints: places, points, setups }),
	).deviations) {
		const own = within.get(checkpointId)!;
		if (deviationMm === null || uncertaintyMm === null) throw new Error(`${checkpointId} was not measured`);
		if (Math.abs(deviationMm) <= 0.98 * uncertaintyMm) own.at95++;
		if (Math.abs(deviationMm) <= uncertaintyMm) own.at2++;
	}
}
for (const [kind, { at95, at2 }] of within)
	console.log(JSON.stringify({ kind, draws, percentWithin196u: (100 * at95) / draws, percentWithin2u: (100 * at2) / draws }));
