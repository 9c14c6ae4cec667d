import { describe, expect, it } from 'vitest';
import type { FitDetail } from '#shared/fit/contract.ts';
import type { FitPair } from '#shared/fit/fit-schema.ts';
import { planSurvey } from '#shared/fit/plan-survey.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { bestAdditions } from '#src/features/fit/best-additions.ts';
import type { GroupedCheckpoint } from '#src/features/fit/planned-checkpoints.ts';
import { markedTwice, testStability } from '#src/features/fit/stability.ts';
import { expectSurvey, type PlannedInstrument, type PlannedMark, type PlannedStation, stationPlan } from '#src/features/fit/survey-plan.ts';

const instrument: PlannedInstrument = {
	fit: 'levelled',
	distanceMm: 1,
	distancePpm: 2,
	angleSec: 5,
	targetMm: 0.5,
	shotMm: 1,
	commonMm: 0,
	reachM: 1000,
};
const stations: PlannedStation[] = [{ name: 'S1', place: [8, 6, 1] }];
const mark = (name: string, east: number, north: number): PlannedMark => ({
	name,
	place: [east, north, 0],
	sigmaPlanM: 0.001,
	sigmaHeightM: 0.001,
});
const marks = [mark('A', 0, 0), mark('B', 20, 0), mark('C', 0, 20)];
const at = (east: number, north: number, toleranceWidthM: number | null, group = 'bolts'): GroupedCheckpoint => ({
	name: `${east} ${north}`,
	place: [east, north, 0],
	direction: null,
	toleranceWidthM,
	group,
});

describe('what a survey can be expected to tell', () => {
	it('counts by kind what could never be decided and what would be doubtful, as Cm says', () => {
		const checkpoints = [at(5, 5, 0.02), at(5, 5, 0.001), at(5, 5, 0.012), at(400, 400, 0.02), at(5, 5, null, 'slabs')];
		const outcome = expectSurvey(marks, instrument, stations, checkpoints);
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		const plan = stationPlan(marks, instrument, stations[0]!, checkpoints);
		const engine = planSurvey(plan);
		if (!engine.ok) throw new Error(engine.refusal.message);
		const cm = engine.checkpoints.flatMap(({ capability }) => capability ?? []);
		expect(outcome.expected.neverDecided).toBe(cm.filter((value) => value < 1).length);
		expect(outcome.expected.doubtful).toBe(cm.filter((value) => value >= 1 && value < 3).length);
		expect(outcome.expected.neverDecided).toBe(2);
		expect(outcome.expected.withTolerance).toBe(4);
		const bolts = outcome.expected.groups.find(({ name }) => name === 'bolts')!;
		expect(bolts.capability).toBe(Math.min(...cm));
		expect(bolts.worstExpandedMm).toBeCloseTo(1000 * engine.checkpoints[3]!.expandedM, 9);
		expect(outcome.expected.groups.find(({ name }) => name === 'slabs')).toMatchObject({
			toleranceMm: null,
			capability: null,
			neverDecided: 0,
		});
	});

	it('finds the mark that helps most, as trying each alone does', () => {
		const unused = [mark('near', 1, 1), mark('far', 60, 60), mark('side', 30, 5)];
		const checkpoints = [at(50, 50, 0.02), at(40, 55, 0.02), at(2, 2, 0.02)];
		const [best] = bestAdditions(marks, unused, instrument, stations, checkpoints).filter(({ isKnown }) => isKnown);
		const worst = (with_: PlannedMark[]) => {
			const outcome = expectSurvey(with_, instrument, stations, checkpoints);
			if (!outcome.ok) return Number.POSITIVE_INFINITY;
			return Math.max(...outcome.expected.checkpoints.map(({ is }) => 2000 * is.fitUncertaintyM));
		};
		const byTrying = unused.map((one) => worst([...marks, one]));
		expect(best!.afterMm).toBeCloseTo(Math.min(...byTrying), 9);
		expect(best!.mark.name).toBe('far');
		expect(best!.beforeMm).toBeCloseTo(worst(marks), 9);
	});

	it('takes each checkpoint from the station nearest to it, and the marks in its reach', () => {
		const two: PlannedStation[] = [
			{ name: 'S1', place: [0, 0, 0] },
			{ name: 'S2', place: [200, 0, 0] },
		];
		const far = [mark('D', 190, 10), mark('E', 210, 10), mark('F', 200, -30)];
		const outcome = expectSurvey([...marks, ...far], { ...instrument, reachM: 60 }, two, [
			at(5, 5, 0.02),
			at(195, 5, 0.02),
			at(120, 0, 0.02),
		]);
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		expect(outcome.expected.checkpoints.map(({ of, stationName }) => [of.name, stationName])).toEqual([
			['5 5', 'S1'],
			['195 5', 'S2'],
			['120 0', 'S2'],
		]);
		expect(outcome.expected.stations.map(({ pairs }) => pairs.map(({ name }) => name).join(''))).toEqual(['ABC', 'DEF']);
		// Further from its station it is known worse: the distance grows, and what an angle is worth.
		const [, near, further] = outcome.expected.checkpoints;
		expect(further!.is.expandedM).toBeGreaterThan(near!.is.expandedM);
		const short = expectSurvey(marks, { ...instrument, reachM: 10 }, stations, [at(5, 5, 0.02)]);
		expect(short).toMatchObject({ ok: false, stationName: 'S1' });
	});

	it('refuses marks that determine nothing', () => {
		expect(expectSurvey(marks.slice(0, 1), instrument, stations, [at(1, 1, 0.02)])).toMatchObject({
			ok: false,
			refusal: { code: 'too-few-pairs' },
		});
		expect(bestAdditions([], marks, instrument, stations, [at(1, 1, 0.02)])).toEqual([]);
	});
});

describe('marks between two surveys', () => {
	const yaw = (angle: number, [x, y, z]: readonly number[]): [number, number, number] => [
		Math.cos(angle) * x! - Math.sin(angle) * y!,
		Math.sin(angle) * x! + Math.cos(angle) * y!,
		z!,
	];
	/** A fit of marks sighted from somewhere else; its rotation turns survey into design. */
	function fitOf(
		angle: number,
		seed: number,
		moved: Record<string, readonly [number, number, number]> = {},
		over: Partial<FitDetail> = {},
	): FitDetail {
		const random = seededRandom(7);
		const noise = seededRandom(seed);
		const pairs = Array.from({ length: 8 }, (_, i): FitPair => {
			const name = `M${i + 1}`;
			const place = [random() * 60, random() * 40, random() * 5];
			const by = moved[name] ?? [0, 0, 0];
			const now = place.map((value, axis) => value + by[axis]! + (noise() - 0.5) * 0.002);
			return {
				name,
				control: place as [number, number, number],
				survey: yaw(-angle, now),
				surveySigma: [0.001, 0.001, 0.001],
				controlSigma: [0.001, 0.001, 0.001],
			};
		});
		const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
		const rotation = [
			[cos, -sin, 0],
			[sin, cos, 0],
			[0, 0, 1],
		];
		return { kind: 'levelled', shelves: [], pairs: { pairs }, result: { rotation }, ...over } as unknown as FitDetail;
	}

	it('say that nothing moved where nothing did', () => {
		const outcome = testStability(fitOf(0.4, 1), fitOf(2.1, 2));
		expect(outcome).toMatchObject({ ok: true, test: { comparison: { congruent: true } } });
	});

	it('name the mark that moved, and give its movement along the design’s axes', () => {
		const outcome = testStability(fitOf(0.4, 1), fitOf(2.1, 2, { M3: [0.012, -0.02, 0.006] }));
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		const moved = outcome.test.marks.filter(({ isStable }) => isStable === false);
		expect(moved.map(({ name }) => name)).toEqual(['M3']);
		const [east, north, level] = moved[0]!.movementMm!;
		expect(Math.abs(east - 12)).toBeLessThan(3);
		expect(Math.abs(north + 20)).toBeLessThan(3);
		expect(Math.abs(level - 6)).toBeLessThan(3);
	});

	it('take a mark that the later fit set aside as well, and sightings under the labels put back', () => {
		const aside = fitOf(2.1, 2, { M3: [0.02, 0, 0] }, { shelves: [{ name: 'M3', shelf: 'set-aside', reason: 'moved' }] });
		expect(markedTwice(fitOf(0.4, 1), aside).map(({ name }) => name)).toContain('M3');
		const swapped = fitOf(2.1, 2);
		const [one, two] = swapped.pairs.pairs as [FitPair, FitPair];
		[one.survey, two.survey] = [two.survey, one.survey];
		swapped.shelves = [
			{ name: 'M1', shelf: 'in-the-fit', reason: 'x', exchangedWith: 'M2' },
			{ name: 'M2', shelf: 'in-the-fit', reason: 'x', exchangedWith: 'M1' },
		];
		expect(testStability(fitOf(0.4, 1), swapped)).toMatchObject({ ok: true, test: { comparison: { congruent: true } } });
	});

	it('cannot be compared without marks in common', () => {
		const none = fitOf(2.1, 2, {}, { pairs: { pairs: [] } as unknown as FitDetail['pairs'] });
		expect(testStability(fitOf(0.4, 1), none)).toMatchObject({ ok: false, refusal: { code: 'too-few-pairs' } });
	});
});
