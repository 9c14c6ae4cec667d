import { describe, expect, it } from 'vitest';
import type { Deviation } from '#shared/check/check-schema.ts';
import { type WeighedCheckpoint, weighSheet } from '#shared/check/weigh-sheet.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';

const deviation = (deviationMm: number, verdict: Deviation['verdict']): Deviation => ({
	checkpointId: 'k',
	elementId: 'e',
	characteristic: 'face',
	place: [0, 0, 0],
	direction: [1, 0, 0],
	label: 'East face',
	measured: [0, 0, 0],
	notMeasuredReason: null,
	pointName: 'P',
	setupId: null,
	pointCount: 1,
	deviationMm,
	offsetMm: null,
	covarianceMm2: null,
	standardUncertaintyPartsMm: null,
	expandedUncertaintyMm: 3,
	limitsMm: [-10, 10],
	ruleId: 'r',
	verdict,
	beyondMm: null,
	conformity: null,
});
const checkpoint = (mark: string, className: string, measured: Deviation | null, heightM: number | null = 3): WeighedCheckpoint => ({
	checkpointId: mark,
	mark,
	label: 'East face',
	subject: {
		class: className,
		characteristic: 'face',
		storey: 'Ground',
		tag: '',
		mark,
		sizesM: { length: 1, height: heightM, thickness: 0.4 },
	},
	deviation: measured,
	stage: 'as-cast',
});
const sheet: ToleranceSheet = {
	name: 'Sheet',
	decision: 'guarded',
	rules: [
		{ id: 'columns', match: { class: 'IfcColumn' }, lowerMm: -20, upperMm: 20 },
		{ id: 'crossed', match: { class: 'IfcSlab' }, lowerMm: { minus: 5 }, upperMm: { lesserOf: [-8, { heightOver: 400 }] } },
		{ id: 'tall', match: { class: 'IfcWall' }, lowerMm: null, upperMm: { heightOver: 300 } },
	],
};

describe('what a sheet would decide', () => {
	it('counts by the first rule that fits, lists what none decides, and says which verdicts change, from what to what', () => {
		const weighed = weighSheet(
			sheet,
			[
				checkpoint('C/3', 'IfcColumn', deviation(16, 'outside')),
				checkpoint('C/4', 'IfcColumn', deviation(2, 'within')),
				checkpoint('C/5', 'IfcColumn', null),
				checkpoint('S/1', 'IfcSlab', deviation(0, 'within')),
				checkpoint('W/1', 'IfcWall', deviation(9, 'too-close-to-call'), null),
				checkpoint('B/1', 'IfcBeam', deviation(1, 'within')),
			],
			0,
		);
		expect(weighed.decides).toEqual([3, 1, 1]);
		expect(weighed.undecided.map(({ mark }) => mark)).toEqual(['B/1']);
		expect(weighed.faults).toEqual([
			{ ruleIndex: 1, mark: 'S/1', fault: 'crossed' },
			{ ruleIndex: 2, mark: 'W/1', fault: 'height' },
		]);
		expect(weighed.changes.map(({ mark, was, is }) => [mark, was, is])).toEqual([
			['C/3', 'outside', 'within'],
			['S/1', 'within', 'no-tolerance'],
			['W/1', 'too-close-to-call', 'no-tolerance'],
			['B/1', 'within', 'no-tolerance'],
		]);
		expect(weighed.changes[0]).toMatchObject({ deviationMm: 16, wasMm: [-10, 10], isMm: [-20, 20] });
	});
});
