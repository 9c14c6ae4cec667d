import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { apartMm } from '#shared/check/apart.ts';
import type { Deviation } from '#shared/check/check-schema.ts';
import { disagreementFindings, type Measurement, standingOf } from '#shared/check/standing.ts';

const deviation = (over: Partial<Deviation> = {}): Deviation => ({
	checkpointId: 'k1',
	elementId: 'e',
	characteristic: 'face',
	place: [0, 0, 0],
	direction: [1, 0, 0],
	label: 'East face',
	measured: [0, 0, 0],
	notMeasuredReason: null,
	pointName: 'P1',
	setupId: 's',
	pointCount: 1,
	deviationMm: 0,
	offsetMm: null,
	covarianceMm2: null,
	standardUncertaintyPartsMm: null,
	expandedUncertaintyMm: 3,
	limitsMm: [-10, 10],
	ruleId: 'r',
	verdict: 'within',
	beyondMm: null,
	conformity: null,
	...over,
});
const notMeasured = (): Deviation => deviation({ measured: null, deviationMm: null, expandedUncertaintyMm: null, verdict: 'not-measured' });

const measurement = (number: number, over: Partial<Measurement> = {}): Measurement => ({
	checkId: `check ${number}`,
	checkNumber: number,
	surveyId: `survey ${number}`,
	surveyNumber: number,
	surveyName: `Survey ${number}`,
	measuredAt: number * 86_400_000,
	stage: 'as-cast',
	modelId: 'm',
	globalId: 'g',
	isFitAdopted: true,
	isFitChecked: true,
	deviation: deviation(),
	...over,
});

describe('what all published checks say of a checkpoint', () => {
	it('is the newest measurement, whole, whatever order they come in', () => {
		const three = [1, 2, 3].map((number) => measurement(number, { deviation: deviation({ deviationMm: number }) }));
		fc.assert(
			fc.property(fc.shuffledSubarray(three, { minLength: 1 }), (some) => {
				const [standing] = standingOf(some);
				const newest = some.reduce((a, b) => (a.surveyNumber > b.surveyNumber ? a : b));
				expect(standing!.newest).toEqual(newest);
				expect(standing!.trend.map(({ surveyNumber }) => surveyNumber)).toEqual(some.map(({ surveyNumber }) => surveyNumber).sort());
			}),
		);
	});

	it('passes over a measurement whose fit is adopted no more, and says so', () => {
		const [standing] = standingOf([measurement(1), measurement(2, { isFitAdopted: false })]);
		expect(standing!.newest.surveyNumber).toBe(1);
		expect(standing!.passedOver.map(({ surveyNumber }) => surveyNumber)).toEqual([2]);
		expect(standingOf([measurement(2, { isFitAdopted: false })])[0]!.newest.isFitAdopted).toBe(false);
	});

	it('lets what was measured stand where a later survey did not see it, and says not measured where none did', () => {
		expect(standingOf([measurement(1), measurement(2, { deviation: notMeasured() })])[0]!.newest.surveyNumber).toBe(1);
		const never = standingOf([measurement(1, { deviation: notMeasured() }), measurement(2, { deviation: notMeasured() })])[0]!;
		expect(never.newest).toMatchObject({ surveyNumber: 2, deviation: { deviationMm: null } });
		expect(never.trend).toEqual([]);
	});

	it('counts a survey once that was checked twice: the later check of it', () => {
		const again = measurement(3, {
			surveyId: 'survey 1',
			surveyNumber: 1,
			measuredAt: 86_400_000,
			deviation: deviation({ deviationMm: 9 }),
		});
		const [standing] = standingOf([again, measurement(1)]);
		expect(standing!.newest.checkNumber).toBe(3);
		expect(standing!.trend).toHaveLength(1);
		expect(standing!.disagreement).toBeNull();
	});

	it('finds surveys that are apart by more than U together, and never between them a third value', () => {
		fc.assert(
			fc.property(
				fc.double({ min: -50, max: 50, noNaN: true }),
				fc.double({ min: -50, max: 50, noNaN: true }),
				fc.double({ min: 0.1, max: 20, noNaN: true }),
				fc.double({ min: 0.1, max: 20, noNaN: true }),
				(d1, d2, u1, u2) => {
					const [standing] = standingOf([
						measurement(1, { deviation: deviation({ deviationMm: d1, expandedUncertaintyMm: u1 }) }),
						measurement(2, { deviation: deviation({ deviationMm: d2, expandedUncertaintyMm: u2 }) }),
					]);
					expect(standing!.newest.deviation.deviationMm).toBe(d2);
					const isApart = (d2 - d1) ** 2 > u1 ** 2 + u2 ** 2;
					if (Math.abs((d2 - d1) ** 2 - u1 ** 2 - u2 ** 2) > 1e-9) expect(standing!.disagreement !== null).toBe(isApart);
				},
			),
		);
	});

	it('holds neither stages nor what was worked on between against each other', () => {
		const [before, after] = [measurement(1), measurement(2, { deviation: deviation({ deviationMm: 30 }) })];
		expect(standingOf([before, after])[0]!.disagreement).toMatchObject({ apartMm: 30, togetherMm: Math.hypot(3, 3) });
		expect(standingOf([{ ...before, stage: 'as-cast-shored' }, after])[0]!.disagreement).toBeNull();
		expect(standingOf([before, after], { workedOnAt: () => 1.5 * 86_400_000 })[0]!.disagreement).toBeNull();
		expect(standingOf([before, after], { workedOnAt: () => 3 * 86_400_000 })[0]!.disagreement).not.toBeNull();
	});

	it('keeps checkpoints of two models apart though their ids are the same', () => {
		expect(standingOf([measurement(1), measurement(2, { modelId: 'other' })]).map(({ newest }) => newest.surveyNumber)).toEqual([1, 2]);
	});

	it('tells disagreeing surveys once, with how many points and the elements', () => {
		const of = (number: number, checkpointId: string, deviationMm: number) =>
			measurement(number, { globalId: checkpointId, deviation: deviation({ checkpointId, deviationMm }) });
		const standings = standingOf([of(1, 'a', 0), of(1, 'b', 0), of(1, 'c', 0), of(2, 'a', 20), of(2, 'b', 9), of(2, 'c', 1)]);
		const findings = disagreementFindings(standings, (_, globalId) => `Column ${globalId}`);
		expect(findings).toMatchObject([
			{ code: 'surveys-disagree', pairs: ['Column a', 'Column b'], evidence: { earlierSurvey: 1, laterSurvey: 2, count: 2, apartMm: 20 } },
		]);
		expect(findings[0]!.message).toMatch(
			/^Surveys 1 and 2 are apart by more than their U together at 2 points \(Column a, Column b\), most by 20 mm/,
		);
	});
});

describe('how far two measurements are apart', () => {
	it('takes out what the design moved between revisions', () => {
		// The face was moved 12 mm out; the work stayed: 12 proud of the old design is on the new one.
		const old = deviation({ deviationMm: 12 });
		const moved = deviation({ deviationMm: 0, place: [0.012, 0, 0] });
		expect(apartMm(old, moved)!.apartMm).toBeCloseTo(0, 9);
		expect(apartMm(deviation(), deviation({ direction: [0, 1, 0] }))).toBeNull();
		expect(apartMm(deviation(), deviation({ expandedUncertaintyMm: null }))).toBeNull();
	});

	it('is along the difference in plan', () => {
		const at = (east: number, north: number): Deviation =>
			deviation({
				characteristic: 'plan',
				direction: null,
				deviationMm: Math.hypot(east, north),
				offsetMm: [east, north],
				covarianceMm2: [
					[1, 0],
					[0, 16],
				],
			});
		expect(apartMm(at(0, 0), at(6, 0))).toEqual({ apartMm: 6, togetherMm: 2 * Math.SQRT2 });
		expect(apartMm(at(0, 0), at(0, 6))).toEqual({ apartMm: 6, togetherMm: 8 * Math.SQRT2 });
	});
});
