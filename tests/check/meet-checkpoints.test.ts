import { describe, expect, it } from 'vitest';
import type { CheckInput, CheckInputCheckpoint, CheckInputPoint } from '#shared/check/check-input.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { pointNameKey } from '#shared/survey/point-name.ts';
import {
	aCheck,
	aCheckpoint,
	anElement,
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
} from './measured-world.ts';

const met = (over: Partial<CheckInput>) => {
	const output = runCheck(aCheck(over));
	return {
		...output,
		names: output.deviations.map(({ pointName }) => pointName),
		codes: output.findings.map(({ code }) => code),
		reasons: Object.fromEntries(output.unmatchedPoints.map(({ name, reason }) => [name, reason])),
	};
};

describe('names', () => {
	it.each([
		['AB-C4-2', 'ab c4_2'],
		['AB-C4-2', 'Ab.C4--2 '],
		['É1', 'e\u03011'],
		['C/3', 'c/3'],
	])('%s and %s are one', (a, b) => {
		expect(pointNameKey(a)).toBe(pointNameKey(b));
	});
	it.each([
		['01', '1'],
		['AB-C42', 'AB-C4-2'],
		['C3', 'C/3'],
		['1.0', '10'],
	])('%s and %s are two', (a, b) => {
		expect(pointNameKey(a)).not.toBe(pointNameKey(b));
	});
});

describe('meeting by name', () => {
	const bolt = { direction: null, place: at(3, 4, 0), mark: 'AB-C4-2' } as const;
	const plan = aCheckpoint({ ...bolt, id: 'p', characteristic: 'plan' });
	const level = aCheckpoint({ ...bolt, id: 'l', characteristic: 'level' });
	it('takes id, mark or the element’s mark, in any of their spellings', () => {
		for (const name of ['c1', 'C1', 'C3-G-E', 'c3_g.e', 'C3 G', 'c3-g'])
			expect(met({ points: [aPoint(at(0.205, 0, 1.5), { name })] }).names).toEqual([name]);
		expect(met({ points: [aPoint(at(0.205, 0, 1.5), { name: 'C03-G-E' })] }).reasons).toEqual({});
		expect(met({ points: [aPoint(at(5, 0, 1.5), { name: 'C03-G-E' })] }).names).toEqual([null]);
	});
	it('takes one shot at a bolt for plan and level both', () => {
		expect(met({ checkpoints: [plan, level], points: [aPoint(at(3.002, 4, 0.005), { name: 'AB-C4-2' })] }).names).toEqual([
			'AB-C4-2',
			'AB-C4-2',
		]);
	});
	it('takes the characteristic that code or name say', () => {
		const shot = at(3.002, 4, 0.005);
		expect(met({ checkpoints: [plan, level], points: [aPoint(shot, { name: 'AB-C4-2', code: 'TOC' })] }).names).toEqual([null, 'AB-C4-2']);
		expect(met({ checkpoints: [plan, level], points: [aPoint(shot, { name: 'ab c4 2 plan' })] }).names).toEqual(['ab c4 2 plan', null]);
	});
	const faces = (half: number, mark = 'C3-G'): CheckInputCheckpoint[] =>
		(
			[
				['E', 1, 0],
				['N', 0, 1],
				['W', -1, 0],
				['S', 0, -1],
			] as const
		).map(([side, e, n]) => aCheckpoint({ id: side, mark, place: at(half * e, half * n, 1.5), direction: [e, n, 0] }));
	it('takes of an element’s faces the one whose plane the shot lies on', () => {
		expect(met({ checkpoints: faces(0.2), points: [aPoint(at(0.02, 0.207, 1.5), { name: 'C3-G' })] }).names).toEqual([
			null,
			'C3-G',
			null,
			null,
		]);
		expect(met({ checkpoints: faces(0.2, 'x'), points: [aPoint(at(0.02, 0.207, 1.5), { name: '17' })] }).names).toEqual([
			null,
			'17',
			null,
			null,
		]);
	});
	it('takes none where two are as likely, and says so', () => {
		const { names, codes, reasons } = met({ checkpoints: faces(0.2), points: [aPoint(at(0.19, 0.195, 1.5), { name: 'C3-G' })] });
		expect(names).toEqual([null, null, null, null]);
		expect(codes).toContain('two-in-reach');
		expect(reasons).toEqual({ 'C3-G': expect.stringContaining('within reach') });
	});
	it('lets a mark in plan be sighted at any height, but not by nearness', () => {
		expect(met({ checkpoints: [plan], points: [aPoint(at(3, 4, 1.2), { name: 'AB-C4-2' })] }).names).toEqual(['AB-C4-2']);
		expect(met({ checkpoints: [plan], points: [aPoint(at(3, 4, 1.2), { name: '9' })] }).names).toEqual([null]);
	});
	it('prefers the name to nearness', () => {
		const { names, reasons } = met({ points: [aPoint(at(0.2, 0, 1.5), { name: '9' }), aPoint(at(0.204, 0.1, 1.5))] });
		expect(names).toEqual(['C3-G-E']);
		expect(reasons).toEqual({ '9': 'its checkpoint was measured by name' });
	});
	it('says that a named point lies too far', () => {
		const { codes, deviations } = met({ points: [aPoint(at(1.44, 0, 1.5))] });
		expect(codes).toContain('far-from-its-mark');
		expect(deviations[0]!.notMeasuredReason).toContain('1.24 m off the face');
	});
});

describe('meeting by nearness', () => {
	const marks = (places: Vector3[]) =>
		places.map((place, k) => aCheckpoint({ id: `m${k}`, mark: `m${k}`, characteristic: 'plan', direction: null, place }));
	it('takes the only one within reach', () => {
		expect(met({ checkpoints: marks([at(0, 0, 0), at(1, 0, 0)]), points: [aPoint(at(0.98, 0.02, 0.1), { name: '1' })] }).names).toEqual([
			null,
			'1',
		]);
	});
	it('never guesses between two bolts, however near to one', () => {
		const { names, codes } = met({ checkpoints: marks([at(0, 0, 0), at(0.15, 0, 0)]), points: [aPoint(at(0.15, 0, 0), { name: '1' })] });
		expect(names).toEqual([null, null]);
		expect(codes).toContain('two-in-reach');
	});
	it('never picks the point that flatters a mark', () => {
		const { names, deviations, codes } = met({
			checkpoints: marks([at(0, 0, 0)]),
			points: [aPoint(at(0.001, 0, 0), { name: '1' }), aPoint(at(0.05, 0, 0), { name: '2' })],
		});
		expect(names).toEqual([null]);
		expect(deviations[0]!.notMeasuredReason).toBe('2 points within reach and none named');
		expect(codes).toContain('two-in-reach');
	});
	it('takes on a face the point measured nearest its place, not the one nearest the design', () => {
		const { names, reasons } = met({
			points: [aPoint(at(0.2, 0.2, 1.5), { name: 'flat' }), aPoint(at(0.215, 0.02, 1.5), { name: 'near' })],
		});
		expect(names).toEqual(['near']);
		expect(reasons).toEqual({ flat: 'near was measured nearer to the same checkpoint' });
	});
	it('leaves control out', () => {
		expect(met({ points: [aPoint(at(0.2, 0, 1.5), { name: '9', code: 'CP1' })] }).reasons).toEqual({
			'9': 'its code marks control, not work',
		});
	});
	it('finds what looking at every pair finds', () => {
		for (const seed of [1, 2, 3, 4]) {
			const u = seeded(seed);
			const random = () => at(12 * u() - 6, 12 * u() - 6, 3 * u());
			const checkpoints = Array.from({ length: 150 }, (_, k) => {
				const angle = 6.3 * u();
				return aCheckpoint({
					id: `c${k}`,
					elementId: 'e1',
					mark: `m${k}`,
					characteristic: (['face', 'plan', 'level'] as const)[k % 3]!,
					place: random(),
					direction: k % 3 === 0 ? [Math.cos(angle), Math.sin(angle), 0] : null,
				});
			});
			const points = Array.from({ length: 600 }, (_, k): CheckInputPoint & { place: Vector3 } => {
				const place = random();
				return { ...aPoint(place, { name: `p${k}` }), place };
			});
			const reach = 0.3;
			const isNear = (c: CheckInputCheckpoint, [e, n, h]: Vector3): boolean => {
				const d = [e - c.place[0], n - c.place[1], h - c.place[2]] as const;
				const flat = Math.hypot(d[0], d[1]);
				if (c.characteristic !== 'face') return flat <= reach && Math.abs(d[2]) <= reach;
				const along = d[0] * c.direction![0] + d[1] * c.direction![1];
				return Math.abs(along) <= reach && Math.hypot(-d[0] * c.direction![1] + d[1] * c.direction![0], d[2]) <= reach;
			};
			const { deviations, unmatchedPoints } = runCheck(aCheck({ elements: [anElement({ mark: 'zz' })], checkpoints, points }));
			const alone = new Map<string, string[]>();
			for (const point of points) {
				const near = checkpoints.filter((c) => isNear(c, point.place));
				if (near.length === 1) alone.set(near[0]!.id, [...(alone.get(near[0]!.id) ?? []), point.name]);
				if (near.length === 0) expect(unmatchedPoints.find(({ name }) => name === point.name)?.reason).toBe('no checkpoint within reach');
			}
			expect(alone.size).toBeGreaterThan(20);
			for (const [id, names] of alone) {
				const deviation = deviations.find(({ checkpointId }) => checkpointId === id)!;
				if (deviation.characteristic !== 'plan') expect(deviation.pointName).not.toBeNull();
				else if (names.length === 1) expect([names[0], null]).toContain(deviation.pointName);
				else expect(deviation.pointName).toBeNull();
			}
		}
	});
});

describe('several measurements', () => {
	it('of one name in one set-up are one mean; a difference over 3σ√2 is a finding', () => {
		const shots = (apart: number) => [aPoint(at(0.2, 0, 1.5)), aPoint(at(0.2 + apart, 0, 1.5))];
		expect(met({ points: shots(0.004) }).codes).not.toContain('repeats');
		expect(met({ points: shots(0.0062) }).codes).toContain('repeats');
	});
	it('from two set-ups are never averaged: the better known one counts', () => {
		const setups = [aSetup(), aSetup({ id: 's2', name: 'Station 2', commonMm: 1 })];
		const points = (mm: number) => [aPoint(at(0.2, 0, 1.5)), aPoint(at(0.2 + mm / 1000, 0, 1.5), { setupId: 's2' })];
		const near = met({ setups, points: points(3) });
		expect(near.deviations[0]).toMatchObject({ setupId: 's2', pointCount: 1 });
		expect(near.deviations[0]!.deviationMm).toBeCloseTo(3, 5);
		expect(near.codes).not.toContain('measured-twice');
		expect(met({ setups, points: points(30) }).codes).toContain('measured-twice');
		// Beyond the U of the difference, √(U₁² + U₂²), and not only beyond their sum (JCGM 100, 5.1).
		const one = (setupId: string) => met({ setups, points: [aPoint(at(0.2, 0, 1.5), { setupId })] }).deviations[0]!.expandedUncertaintyMm!;
		const together = Math.hypot(one('s1'), one('s2'));
		expect(met({ setups, points: points(together * 0.99) }).codes).not.toContain('measured-twice');
		expect(met({ setups, points: points(together * 1.01) }).codes).toContain('measured-twice');
	});
	it('does not average places that only share a name', () => {
		const { deviations } = met({ points: [aPoint(at(0.21, 0, 1.5)), aPoint(at(9, 0, 1.5))] });
		expect(deviations[0]).toMatchObject({ pointCount: 1 });
		expect(deviations[0]!.deviationMm).toBeCloseTo(10, 5);
	});
});

describe('a level run', () => {
	it('gives levels by name alone, read at the checkpoint’s own place', () => {
		const fit = fitOf({ fit: 'height', pairs: pairsOf(targetPlaces, withSigma) });
		const checkpoints = [
			aCheckpoint({ id: 'l', mark: 'S1', characteristic: 'level', direction: null, place: at(7, 8, 4) }),
			aCheckpoint({ id: 'p', mark: 'S2', characteristic: 'plan', direction: null, place: at(1, 1, 1) }),
		];
		const height = toSurvey(at(0, 0, 4.006))[2];
		const points = [
			aPoint(at(0, 0, 0), { name: 'S1', surveyPoint: [0, 0, height] }),
			aPoint(at(0, 0, 0), { name: 'S2', surveyPoint: [0, 0, 0] }),
			aPoint(at(0, 0, 0), { name: '9', surveyPoint: [0, 0, height] }),
		];
		const { deviations, reasons } = met({ checkpoints, points, setups: [aSetup({ fit })] });
		expect(deviations[0]!.deviationMm).toBeCloseTo(6, 5);
		expect(deviations[1]!.notMeasuredReason).toContain('heights alone');
		expect(reasons['9']).toContain('by name alone');
	});
});

describe('one cause for many', () => {
	const u = seeded(5);
	const levels = Array.from({ length: 12 }, (_, k) =>
		aCheckpoint({ id: `l${k}`, mark: `L${k}`, characteristic: 'level', direction: null, place: at(4 * (k % 4), 5 * Math.floor(k / 4), 4) }),
	);
	const faces = Array.from({ length: 12 }, (_, k) => {
		const angle = (k * Math.PI) / 2;
		return aCheckpoint({
			id: `f${k}`,
			mark: `F${k}`,
			place: at(4 * (k % 4), 5 * Math.floor(k / 4), 1.5),
			direction: [Math.round(Math.cos(angle)), Math.round(Math.sin(angle)), 0],
		});
	});
	const shots = (checkpoints: CheckInputCheckpoint[], by: (c: CheckInputCheckpoint) => Vector3, noiseM = 0.003) =>
		checkpoints.map((c) => {
			const [e, n, h] = by(c);
			return aPoint([c.place[0] + e + noiseM * gaussian(u), c.place[1] + n + noiseM * gaussian(u), c.place[2] + h + noiseM * gaussian(u)], {
				name: c.mark,
			});
		});
	const shiftOf = (over: Partial<CheckInput>) =>
		runCheck(aCheck(over))
			.findings.filter(({ code }) => code === 'common-shift')
			.map(({ evidence }) => evidence);
	it('is seen in levels that are all low', () => {
		const [evidence] = shiftOf({ checkpoints: levels, points: shots(levels, () => [0, 0, -0.015]) });
		expect(evidence).toMatchObject({ kind: 'level' });
		expect(evidence!.heightMm as number).toBeCloseTo(-15, -0.5);
	});
	it('is seen in plan from faces that look all ways', () => {
		const found = shiftOf({ checkpoints: faces, points: shots(faces, () => [0.012, -0.009, 0]) });
		expect(found).toHaveLength(1);
		expect(found[0]).toMatchObject({ kind: 'plan' });
		expect(Math.abs((found[0]!.eastMm as number) - 12)).toBeLessThan(4);
		expect(Math.abs((found[0]!.northMm as number) + 9)).toBeLessThan(4);
	});
	it('is seen in faces that are all proud', () => {
		const found = shiftOf({
			checkpoints: faces,
			points: shots(faces, ({ direction }) => [0.018 * direction![0], 0.018 * direction![1], 0]),
		});
		expect(found.map(({ kind }) => kind)).toEqual(['face']);
	});
	it('is not seen in honest scatter', () => {
		let raised = 0;
		for (let run = 0; run < 60; run++)
			raised += shiftOf({ checkpoints: [...levels, ...faces], points: shots([...levels, ...faces], () => [0, 0, 0]) }).length;
		expect(raised).toBeLessThanOrEqual(9);
	});
	it('is another unit where all named points spread by a unit’s ratio', () => {
		const places = faces.map(({ place }) => place);
		const middle = at(6, 5, 1.5);
		const points = places.map((place, k) =>
			aPoint([0, 1, 2].map((axis) => middle[axis]! + 3.2808 * (place[axis]! - middle[axis]!)) as unknown as Vector3, { name: `F${k}` }),
		);
		const { findings } = runCheck(aCheck({ checkpoints: faces, points }));
		expect(findings.find(({ code }) => code === 'units')?.evidence).toMatchObject({ from: 'ft', to: 'm' });
	});
	it('is another frame where all named points lie the same way off', () => {
		const { findings } = runCheck(aCheck({ checkpoints: faces, points: shots(faces, () => [1.2, 0, 0.5]) }));
		expect(findings.find(({ code }) => code === 'common-shift')?.message).toContain('12 points named');
	});
});
