import { describe, expect, it } from 'vitest';
import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckDetail, CheckHead } from '#shared/check/contract.ts';
import type { Line } from '#shared/site/contract.ts';
import { type NextFacts, nextActs } from '#shared/site/next-acts.ts';
import type { SurveySummary } from '#shared/survey/contract.ts';
import { knotsOf } from '#src/features/site/site-line.tsx';
import { homeless } from '#src/pages/board/homeless.ts';
import { knotXs, stringPath } from '#src/ui/line-geometry.ts';

const states = (over: Partial<Record<Line['knots'][number]['knot'], 'solid' | 'half' | 'open'>> = {}): Line => ({
	knots: (['model', 'control', 'surveys', 'check', 'flags', 'pours', 'records'] as const).map((knot) => ({
		knot,
		state: over[knot] ?? 'open',
		figure: '',
	})),
	newestCheckId: null,
	isTaut: true,
});
const aSurvey = (fitIds: (string | null)[]): SurveySummary => ({
	surveyId: 's14',
	number: 14,
	name: 'ground columns',
	stage: 'before-pour',
	surveyedOn: '2026-12-01',
	observer: 'Jo',
	instrument: 'total station',
	serial: '1',
	fileName: 'a.csv',
	fileSha256: '',
	pointCount: 420,
	state: 'ready',
	reason: null,
	jobId: null,
	storedBy: 'Jo',
	storedAt: new Date(0),
	setups: fitIds.map((adoptedFitId, index) => ({
		setupId: `u${index + 1}`,
		name: String(index + 1),
		levelling: 'levelled',
		bringsScale: false,
		pointSigmaM: null,
		commonMm: 2,
		instrumentHeightM: null,
		pointCount: 200,
		targetCount: 7,
		adoptedFitId,
	})),
});
const aHead = (over: Partial<CheckHead> = {}): CheckHead => ({
	checkId: 'c3',
	number: 3,
	state: 'trial',
	reason: null,
	jobId: null,
	stage: 'before-pour',
	revision: { revisionId: 'r4', modelName: 'Structure', number: 4, isNewest: true },
	survey: { surveyId: 's14', number: 14, name: 'ground columns', surveyedOn: '2026-12-01', setupCount: 1 },
	fits: [{ fitId: 'f1', setupId: 'u1', setupName: '1', number: 1, adoptedBy: 'Jo', checkedBy: null, isNewest: true }],
	isSecondPersonAsked: true,
	sheet: { sheetId: 't', name: 'C2', revision: 2, decision: 'guarded', isNewest: true },
	summary: { within: 9, outside: 6, 'too-close-to-call': 2, undecided: 0, 'not-measured': 0, 'no-tolerance': 0 },
	madeBy: 'Jo',
	madeAt: new Date(0),
	inputsSha256: '',
	...over,
});
const facts = (over: Partial<NextFacts> = {}): NextFacts => ({
	roles: ['site-engineer'],
	line: states(),
	surveys: [],
	checks: [],
	pourCount: 1,
	...over,
});
const verbs = (over: Partial<NextFacts>) => nextActs(facts(over)).map((act) => act.verb);

describe('next for you', () => {
	it('begins a site with the model and the control, each by whom may bring it', () => {
		expect(verbs({ roles: ['project-engineer'] })).toEqual(['Bring in the model']);
		expect(verbs({ roles: ['site-engineer'] })).toEqual(['Bring in the control']);
		expect(verbs({ roles: ['site-engineer', 'project-engineer'] })).toEqual(['Bring in the model', 'Bring in the control']);
		expect(verbs({ roles: ['observer'] })).toEqual([]);
	});

	it('goes along the line: survey, fit, check, look', () => {
		const line = states({ model: 'solid', control: 'solid' });
		expect(verbs({ line })).toEqual(['Bring in a survey']);
		const [fit] = nextActs(facts({ line, surveys: [aSurvey(['f1', null])] }));
		expect(fit).toMatchObject({
			verb: 'Fit set-up 2',
			path: 'surveys/s14/setups/u2',
			why: 'Survey 14, ground columns: 1 of 2 set-ups stands on no adopted fit.',
		});
		expect(verbs({ line, surveys: [aSurvey(['f1'])] })).toEqual(['Check survey 14']);
		expect(verbs({ line, surveys: [aSurvey(['f1'])], checks: [aHead()] })).toEqual(['Look at check 3']);
	});

	it('asks to check again only where something newer is there, and says what', () => {
		const checks = [aHead({ revision: { revisionId: 'r4', modelName: 'Structure', number: 4, isNewest: false } })];
		const [again, look] = nextActs(facts({ line: states({ model: 'solid', control: 'solid' }), surveys: [aSurvey(['f1'])], checks }));
		expect(again).toMatchObject({ verb: 'Check again', why: 'Check 3 stands on rev 4, not the newest.' });
		expect(look?.why).toBe('6 outside, 2 too close to call.');
		expect(verbs({ roles: ['contractor'], checks })).toEqual(['Look at check 3']);
	});
});

const aDeviation = (over: Partial<Deviation>): Deviation => ({
	checkpointId: 'cp',
	elementId: 'e1',
	characteristic: 'face',
	place: [0, 0, 0],
	direction: [1, 0, 0],
	label: 'East face',
	measured: [0, 0, 0],
	notMeasuredReason: null,
	pointName: 'p',
	setupId: 'u1',
	pointCount: 1,
	deviationMm: 2,
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
const aCheck = (deviations: Deviation[], over: Partial<CheckHead> = {}): CheckDetail => ({
	...aHead(over),
	findings: [],
	derived: [],
	unmatchedPoints: [],
	elements: [
		{
			elementId: 'e1',
			globalId: '',
			entityNumber: 1,
			class: 'IfcColumn',
			title: 'Column C/3',
			mark: 'C3',
			storey: 'Ground',
			pourIds: ['p7'],
		},
		{ elementId: 'e2', globalId: '', entityNumber: 2, class: 'IfcColumn', title: 'Column A/3', mark: 'A3', storey: 'Ground', pourIds: [] },
	],
	deviations,
});

describe('rows without a home', () => {
	it('names what belongs to no row', () => {
		expect(homeless(aCheck([aDeviation({ verdict: 'no-tolerance', limitsMm: null })]))).toEqual([
			{ words: 'In no pour', why: '1 element' },
			{ words: 'No rule', why: '1 point' },
		]);
	});
});

describe('the line', () => {
	it('leads to every place, and to the newest check where there is one', () => {
		const knots = knotsOf('site', { ...states({ check: 'half' }), newestCheckId: 'c3' });
		expect(knots.map((knot) => knot.to)).toEqual([
			'/sites/site/model',
			'/sites/site/control',
			'/sites/site/surveys',
			'/sites/site/checks/c3',
			'/sites/site/flags',
			'/sites/site/pours',
			'/sites/site/records',
		]);
		expect(knotsOf('site', states()).find((knot) => knot.key === 'check')?.to).toBe('/sites/site/check');
	});

	it('has its knots and its string where the drawing has them', () => {
		const xs = knotXs(7, 1280, 24);
		expect(xs).toEqual([30, 206, 382, 558, 734, 910, 1086]);
		expect(stringPath(xs, 1280, 3, true)).toBe('M0 16L558 20L1280 16');
		expect(stringPath(xs, 1280, null, true)).toBe('M0 16H1280');
		expect(stringPath(xs, 1280, 3, false).match(/Q/g)).toHaveLength(8);
	});
});
