import { describe, expect, it } from 'vitest';
import type { CheckInput, CheckInputCheckpoint } from '#shared/check/check-input.ts';
import { type DerivedResult, derivedResultSchema } from '#shared/check/check-schema.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { ToleranceRule } from '#shared/tolerance/sheet-schema.ts';
import {
	aCheck,
	aCheckpoint,
	anElement,
	aPoint,
	aSetup,
	aSheet,
	at,
	exactFit,
	fitOf,
	gaussian,
	pairsOf,
	seeded,
	targetPlaces,
	toSurvey,
	withSigma,
} from './measured-world.ts';

const rule = (characteristic: NonNullable<ToleranceRule['match']['characteristic']>, over: Partial<ToleranceRule> = {}): ToleranceRule => ({
	id: characteristic,
	match: { characteristic },
	lowerMm: -10,
	upperMm: 10,
	...over,
});

/** Measures checkpoints as built by `move` and gives what is derived under one rule. */
function derive(
	given: readonly CheckInputCheckpoint[],
	move: (c: CheckInputCheckpoint, k: number) => Vector3,
	derivedRule: ToleranceRule,
	over: Partial<CheckInput> = {},
): DerivedResult[] {
	const checkpoints = given.map((c, k) => ({ ...c, id: `c${k}`, mark: c.mark === 'C3-G-E' ? `m${k}` : c.mark }));
	const points = checkpoints.map((c, k) => {
		const [e, n, h] = move(c, k);
		return aPoint([c.place[0] + e, c.place[1] + n, c.place[2] + h], { name: c.id });
	});
	const { derived } = runCheck(aCheck({ checkpoints, points, sheet: aSheet({ rules: [derivedRule] }), ...over }));
	for (const result of derived) derivedResultSchema.parse(result);
	return derived;
}

const heightOf = (c: CheckInputCheckpoint) => c.place[2] - at(0, 0, 0)[2];
const column = [0.2, 1.4, 2.6].flatMap((height) =>
	(
		[
			[1, 0],
			[0, 1],
			[-1, 0],
			[0, -1],
		] as const
	).map(([e, n]) => aCheckpoint({ place: at(0.2 * e, 0.2 * n, height), direction: [e, n, 0] })),
);

describe('plumb', () => {
	const plumb = rule('plumb', {
		lowerMm: { minus: { greaterOf: [5, { heightOver: 300 }] } },
		upperMm: { greaterOf: [5, { heightOver: 300 }] },
	});
	it('is the top over the bottom, signed along each axis of the element', () => {
		const [east, north] = derive(column, (c) => [0.01 * heightOf(c), -0.002 * heightOf(c), 0], plumb);
		expect(east!.deviationMm).toBeCloseTo(24, 4);
		expect(north!.deviationMm).toBeCloseTo(-4.8, 4);
		expect(east).toMatchObject({ label: 'along east over 2.4 m', verdict: 'outside', ruleId: 'plumb' });
		expect(east!.limitsMm![1]).toBeCloseTo(10, 9);
		expect(east!.from).toHaveLength(4);
	});
	it('does not take a thick or a shifted element for a leaning one', () => {
		for (const result of derive(column, ({ direction }) => [0.012 * direction![0] + 0.02, 0.012 * direction![1], 0], plumb))
			expect(result.deviationMm).toBeCloseTo(0, 4);
		// One side at the top, the other at the bottom: nothing can be said.
		expect(
			derive(
				[aCheckpoint({ place: at(0.2, 0, 2.6) }), aCheckpoint({ place: at(-0.2, 0, 0.2), direction: [-1, 0, 0] })],
				() => [0.01, 0, 0],
				plumb,
			),
		).toEqual([]);
	});
	it('is free of the common part and of most of the fit', () => {
		const setup = aSetup({ commonMm: 50, pointSigmaM: [0.001, 0.001, 0.001] });
		const [east] = derive(column, () => [0, 0, 0], plumb, { setups: [setup] });
		// Four shots of 1 mm, each with half a share: 1 mm; what a levelled fit adds between two heights over one spot is nothing.
		expect(east!.uncertaintyMm).toBeCloseTo(2, 1);
	});
});

describe('section', () => {
	it('is the sum of two opposite faces, whatever shifts the element', () => {
		const results = derive(
			column,
			({ direction }) => [0.004 * direction![0] + 0.03, 0.004 * direction![1] - 0.02, 0],
			rule('section', { lowerMm: -5, upperMm: 12 }),
		);
		expect(results).toHaveLength(6);
		for (const { deviationMm, label, from, uncertaintyMm } of results) {
			expect(deviationMm).toBeCloseTo(8, 4);
			expect(label).toBe('section of 400 mm');
			expect(from).toHaveLength(2);
			expect(uncertaintyMm).toBeCloseTo(2 * Math.SQRT2, 1);
		}
	});
});

const line = (heights: readonly number[], spacingM = 0.5): [CheckInputCheckpoint[], (c: CheckInputCheckpoint, k: number) => Vector3] => [
	heights.map((_, k) => aCheckpoint({ characteristic: 'level', direction: null, place: at(spacingM * k, 0, 4) })),
	(_c, k) => [0, 0, heights[k]! / 1000],
];

describe('flatness', () => {
	const flat = (straightedgeM: number) => rule('flatness', { lowerMm: null, upperMm: 5, straightedgeM });
	it('is the greatest gap between two high points no further apart than the straightedge', () => {
		const [checkpoints, move] = line([6, 2, 0, 4, 8]);
		// Laid from 6 to 8 over 2 m: gaps 4.5, 7, 3.5.
		const [result] = derive(checkpoints, move, flat(2));
		expect(result!.deviationMm).toBeCloseTo(7, 4);
		expect(result).toMatchObject({ verdict: 'too-close-to-call', limitsMm: [null, 5], label: 'greatest gap under a straightedge of 2 m' });
		// Of 1 m: from 6 over 2 to 0 the gap is 1; over 2, 0, 4: 3; over 0, 4, 8 none.
		expect(derive(checkpoints, move, flat(1))[0]!.deviationMm).toBeCloseTo(3, 4);
	});
	it('rests on what is high: a hump has no gap under it, a slope none at all', () => {
		const [hump, moveHump] = line([0, 5, 8, 5, 0]);
		expect(derive(hump, moveHump, flat(2))).toEqual([]);
		const [slope, moveSlope] = line([0, 5, 10, 15, 20]);
		for (const { deviationMm } of derive(slope, moveSlope, flat(2))) expect(deviationMm).toBeCloseTo(0, 4);
	});
	it('knows that a shift of the whole tells nothing of a gap', () => {
		const [checkpoints, move] = line([6, 2, 0, 4, 8]);
		const [result] = derive(checkpoints, move, flat(2), { setups: [aSetup({ commonMm: 50 })] });
		// Shares ½, ½ and −1 of 1 mm each.
		expect(result!.uncertaintyMm).toBeCloseTo(2 * Math.sqrt(1.5), 1);
	});
	it('about the best-fit plane is a figure of its own', () => {
		const checkpoints = Array.from({ length: 25 }, (_, k) =>
			aCheckpoint({ characteristic: 'level', direction: null, place: at(k % 5, Math.floor(k / 5), 4) }),
		);
		// A tilted plane with one point 10 mm up: the band is 10 mm·(1 − h) + what the plane follows elsewhere.
		const [result] = derive(
			checkpoints,
			(c, k) => [0, 0, 0.003 * (c.place[0] - at(0, 0, 0)[0]) + (k === 12 ? 0.01 : 0)],
			rule('flatness-best-fit', { lowerMm: null, upperMm: 12 }),
		);
		// At the middle of 25 even points the hat value is 1/25, everywhere else the plane is lifted by 10/25.
		expect(result!.deviationMm).toBeCloseTo(10, 4);
		expect(result!.from).toHaveLength(25);
		expect(derive(checkpoints.slice(0, 3), () => [0, 0, 0], rule('flatness-best-fit'))).toEqual([]);
	});
});

describe('bolt distances', () => {
	const places = [at(3, 3, 0), at(3.4, 3, 0), at(3.4, 3.4, 0), at(3, 3.4, 0)];
	const bolts = places.map((place, k) =>
		aCheckpoint({ elementId: `b${k}`, characteristic: 'plan', direction: null, place, mark: `BC2-G-${k + 1}.P` }),
	);
	const elements = places.map((_, k) => anElement({ id: `b${k}`, class: 'IfcMechanicalFastener', mark: `BC2-G-${k + 1}` }));
	const distance = rule('bolt-distance', { lowerMm: -3, upperMm: 3 });
	it('change by neither shift nor turn of the group', () => {
		const turn = 0.02;
		const [ce, cn] = at(3.2, 3.2, 0);
		const moved = derive(
			bolts,
			(c) => [
				0.01 + (Math.cos(turn) - 1) * (c.place[0] - ce) - Math.sin(turn) * (c.place[1] - cn),
				Math.sin(turn) * (c.place[0] - ce) + (Math.cos(turn) - 1) * (c.place[1] - cn),
				0,
			],
			distance,
			{ elements },
		);
		expect(moved).toHaveLength(6);
		for (const { deviationMm, verdict } of moved) {
			expect(deviationMm).toBeCloseTo(0, 4);
			expect(verdict).toBe('within');
		}
	});
	it('find the one bolt that is out', () => {
		const results = derive(bolts, (_c, k) => (k === 2 ? [0.008, 0, 0] : [0, 0, 0]), distance, { elements });
		const out = results.filter(({ verdict }) => verdict === 'outside');
		expect(out.every(({ label }) => label.includes('BC2-G-3'))).toBe(true);
		expect(out.length).toBeGreaterThanOrEqual(1);
	});
	it('are as well known as many surveys of them scatter', () => {
		const u = seeded(19);
		const noise = (sigma: readonly number[]): Vector3 => [sigma[0]! * gaussian(u), sigma[1]! * gaussian(u), sigma[2]! * gaussian(u)];
		const runs = 500;
		let squares = 0;
		let known = 0;
		// Two marks 1.4 m apart, far from the targets: what the fit's turn does to their distance must cancel.
		const two = [at(60, 60, 0), at(61.2, 60.7, 0)].map((place, k) =>
			aCheckpoint({ elementId: `b${k}`, characteristic: 'plan', direction: null, place, mark: `B-${k}` }),
		);
		for (let run = 0; run < runs; run++) {
			const fit = fitOf({
				fit: 'levelled',
				pairs: pairsOf(targetPlaces, withSigma, () => ({ survey: noise(withSigma.surveySigma!), control: noise(withSigma.controlSigma!) })),
			});
			const points = two.map((c, k) => {
				const exact = toSurvey(c.place);
				const error = noise([0.001, 0.001, 0.001]);
				return aPoint(c.place, { name: `B-${k}`, surveyPoint: [exact[0] + error[0], exact[1] + error[1], exact[2] + error[2]] });
			});
			const setups = [aSetup({ fit: { ...fit, chiSquare: null, sigmaGiven: true }, commonMm: 3 })];
			const { derived } = runCheck(
				aCheck({
					elements: elements.map((element, k) => ({ ...element, mark: `B-${k}` })),
					checkpoints: two.map((c, k) => ({ ...c, id: `c${k}` })),
					points,
					setups,
					sheet: aSheet({ rules: [distance] }),
				}),
			);
			squares += derived[0]!.deviationMm ** 2;
			known = derived[0]!.uncertaintyMm! / 2;
		}
		// σ of a variance from 500 runs is 6.3 % of it.
		expect(Math.abs(squares / runs / known ** 2 - 1)).toBeLessThan(0.2);
		expect(known).toBeLessThan(1.5);
		expect(known).toBeGreaterThan(1.4);
	}, 60_000);
});

describe('bolt groups', () => {
	const places = [at(3, 3, 0.2), at(3.4, 3, 0.2), at(3.4, 3.4, 0.2), at(3, 3.4, 0.2)];
	const bolts = places.map((place, k) =>
		aCheckpoint({ elementId: `b${k}`, characteristic: 'plan', direction: null, place, mark: `BC2-G-${k + 1}.P` }),
	);
	const elements = places.map((_, k) => anElement({ id: `b${k}`, class: 'IfcMechanicalFastener', mark: `BC2-G-${k + 1}` }));
	const turned =
		(turn: number, east: number, north: number) =>
		(c: CheckInputCheckpoint): Vector3 => {
			const [ce, cn] = at(3.2, 3.2, 0);
			const [e, n] = [c.place[0] - ce, c.place[1] - cn];
			return [east + (Math.cos(turn) - 1) * e - Math.sin(turn) * n, north + Math.sin(turn) * e + (Math.cos(turn) - 1) * n, 0];
		};
	it('tell shift and turn of the whole apart', () => {
		const move = turned(0.01, 0.007, -0.004);
		const shifts = derive(bolts, move, rule('group-shift', { lowerMm: -5, upperMm: 5 }), { elements });
		expect(shifts.map(({ label }) => label)).toEqual(['BC2-G, 4 marks, shift east', 'BC2-G, 4 marks, shift north']);
		expect(shifts[0]!.deviationMm).toBeCloseTo(7, 4);
		expect(shifts[1]!.deviationMm).toBeCloseTo(-4, 4);
		const [turn, ...others] = derive(bolts, move, rule('group-turn', { lowerMm: -5, upperMm: 5 }), { elements });
		expect(others).toEqual([]);
		expect(turn!.deviationMm).toBeCloseTo(Math.sin(0.01) * 200 * Math.SQRT2, 3);
		expect(turn!.label).toBe('BC2-G, 4 marks, turn at 283 mm');
	});
	it('know the common part in the shift, and none of it in the turn', () => {
		const setups = [aSetup({ commonMm: 50, pointSigmaM: [0.001, 0.001, 0.001] })];
		const [shift] = derive(bolts, () => [0, 0, 0], rule('group-shift'), { elements, setups });
		expect(shift!.uncertaintyMm).toBeGreaterThan(100);
		const [turn] = derive(bolts, () => [0, 0, 0], rule('group-turn'), { elements, setups });
		// Four shots of 1 mm on equal arms: σ of the turn at an arm is 1/√4 mm; the fit's own turn over 0.3 m adds next to nothing.
		expect(turn!.uncertaintyMm).toBeCloseTo(1, 1);
	});
	it('are no groups where marks lie far apart', () => {
		const far = bolts.map((bolt, k) => ({ ...bolt, place: at(3 * k, 0, 0.2) }));
		expect(derive(far, () => [0, 0, 0], rule('group-shift'), { elements })).toEqual([]);
	});
	it('stand out of the nearest concrete below them, whatever the instrument’s height', () => {
		const top = aCheckpoint({ elementId: 'b0', characteristic: 'level', direction: null, place: places[0]!, mark: 'BC2-G-1.T' });
		const slab = (e: number, mark: string) =>
			aCheckpoint({ elementId: 'slab', characteristic: 'level', direction: null, place: at(e, 3, 0), mark });
		const projection: ToleranceRule = {
			id: 'p',
			match: { characteristic: 'projection', class: 'IfcMechanicalFastener' },
			lowerMm: -5,
			upperMm: 10,
		};
		const results = derive([top, slab(3.5, 'S1.T1'), slab(4.2, 'S1.T2')], (_c, k) => [0, 0, [0.006, -0.003, 0.02][k]!], projection, {
			elements: [...elements, anElement({ id: 'slab', class: 'IfcSlab', mark: 'S1' })],
			setups: [aSetup({ commonMm: 50, pointSigmaM: [0.001, 0.001, 0.001] })],
		});
		expect(results).toHaveLength(1);
		expect(results[0]!.deviationMm).toBeCloseTo(9, 4);
		expect(results[0]!.label).toBe('BC2-G-1, projection of 200 mm over S1.T1');
		expect(results[0]!.uncertaintyMm).toBeCloseTo(2 * Math.SQRT2, 1);
	});
});

it('nothing is derived without a rule that names it', () => {
	expect(derive(column, () => [0, 0, 0], { id: 'all', match: {}, lowerMm: -1, upperMm: 1 })).toEqual([]);
});

it('counts what two set-ups adjusted together share in what is derived between them', () => {
	const fit = { ...exactFit(), chiSquare: null, sigmaGiven: true };
	const two = [at(60, 60, 0), at(61.2, 60.7, 0)].map((place, k) =>
		aCheckpoint({ elementId: `b${k}`, place, characteristic: 'plan', direction: null, mark: `B-${k}`, id: `c${k}` }),
	);
	const points = two.map((c, k) => aPoint(c.place, { name: `B-${k}`, setupId: `s${k}` }));
	const uncertainty = (share: number) => {
		const setups = [0, 1].map((k) => ({
			...aSetup({ id: `s${k}`, name: `s${k}`, fit, commonMm: 0, pointSigmaM: [1e-6, 1e-6, 1e-6] }),
			tiedTo: [{ setupId: `s${1 - k}`, covariance: fit.parameterCovariance.map((row) => row.map((value) => share * value)) }],
		}));
		const { derived } = runCheck(
			aCheck({
				elements: two.map((c, k) => anElement({ id: c.elementId, class: 'IfcMechanicalFastener', mark: `B-${k}` })),
				checkpoints: two,
				points,
				setups,
				sheet: aSheet({ rules: [rule('bolt-distance')] }),
			}),
		);
		return derived[0]!.uncertaintyMm!;
	};
	const [independent, half, same] = [uncertainty(0), uncertainty(0.5), uncertainty(1)];
	// Variance falls in the straight line that −2·cov asks for.
	expect(half ** 2).toBeCloseTo((independent ** 2 + same ** 2) / 2, 6);
	expect(same).toBeLessThan(0.5 * independent);
	// Shared wholly it is as if one set-up had measured both.
	const one = runCheck(
		aCheck({
			elements: two.map((c, k) => anElement({ id: c.elementId, class: 'IfcMechanicalFastener', mark: `B-${k}` })),
			checkpoints: two,
			points: two.map((c, k) => aPoint(c.place, { name: `B-${k}` })),
			setups: [aSetup({ fit, commonMm: 0, pointSigmaM: [1e-6, 1e-6, 1e-6] })],
			sheet: aSheet({ rules: [rule('bolt-distance')] }),
		}),
	).derived[0]!.uncertaintyMm!;
	expect(same).toBeCloseTo(one, 6);
});
