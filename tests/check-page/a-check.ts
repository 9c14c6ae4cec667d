import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckDetail, CheckElement } from '#shared/check/contract.ts';
import { judge } from '#shared/check/verdict.ts';

export const siteId = '00000000-0000-4000-8000-000000000001';
export const checkId = '00000000-0000-4000-8000-000000000002';
export const pourId = '00000000-0000-4000-8000-000000000007';
const setupId = '00000000-0000-4000-8000-000000000003';
const id = (n: number): string => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;

/** A face deviation, judged as the product judges, 10 mm either way, u 1.5. Null: not measured. */
export function aFace(over: Partial<Deviation> & Pick<Deviation, 'checkpointId' | 'elementId' | 'deviationMm'>): Deviation {
	const { deviationMm } = over;
	const judged = deviationMm === null ? null : judge({ deviationMm, standardUncertaintyMm: 1.5, limitsMm: [-10, 10], decision: 'guarded' });
	return {
		characteristic: 'face',
		place: [1, 2, 3],
		direction: [1, 0, 0],
		label: 'East face, 2.8 m above its base',
		measured: deviationMm === null ? null : [1 + deviationMm / 1000, 2, 3],
		notMeasuredReason: deviationMm === null ? 'no point within 0.3 m' : null,
		pointName: deviationMm === null ? null : 'P1',
		setupId: deviationMm === null ? null : setupId,
		pointCount: deviationMm === null ? 0 : 1,
		offsetMm: null,
		covarianceMm2: null,
		standardUncertaintyPartsMm: deviationMm === null ? null : { fit: 0.9, point: 0.66, common: 1 },
		expandedUncertaintyMm: deviationMm === null ? null : 3,
		limitsMm: [-10, 10],
		ruleId: 'columns',
		verdict: judged?.verdict ?? 'not-measured',
		beyondMm: judged?.verdict === 'outside' && deviationMm !== null ? Math.abs(deviationMm) - 10 : null,
		conformity: judged?.conformity ?? null,
		...over,
	};
}

export function anElement(n: number, over: Partial<CheckElement> = {}): CheckElement {
	return {
		elementId: id(100 + n),
		globalId: `g${n}`,
		entityNumber: n,
		class: 'IfcColumn',
		title: `Column ${'ABCDEFGH'[n % 8]}/${n}, ground`,
		mark: `${'ABCDEFGH'[n % 8]}${n}-G`,
		storey: 'Ground',
		pourIds: [pourId],
		...over,
	};
}

/** Four columns: A/0 within, B/1 16 proud, C/2 14 shy and upstairs, D/3 too close and not seen. */
export function aCheck(over: Partial<CheckDetail> = {}): CheckDetail {
	const elements = [
		anElement(0),
		anElement(1),
		anElement(2, { title: 'Column C/2, first', mark: 'C2-1', storey: 'First', pourIds: [] }),
		anElement(3),
	];
	const [a, b, c, d] = elements.map((element) => element.elementId) as [string, string, string, string];
	const deviations = [
		aFace({ checkpointId: 'A0-east', elementId: a, deviationMm: 1 }),
		aFace({ checkpointId: 'B1-east', elementId: b, deviationMm: 16, place: [6, 2, 3] }),
		aFace({
			checkpointId: 'B1-west',
			elementId: b,
			deviationMm: -2,
			direction: [-1, 0, 0],
			label: 'West face, 2.8 m above its base',
			place: [5.6, 2, 3],
		}),
		aFace({ checkpointId: 'C2-east', elementId: c, deviationMm: -24, place: [11, 2, 7] }),
		aFace({ checkpointId: 'D3-east', elementId: d, deviationMm: 9, place: [16, 2, 3] }),
		aFace({ checkpointId: 'D3-west', elementId: d, deviationMm: null, label: 'West face, 1.0 m above its base', place: [15.6, 2, 1] }),
	];
	return {
		checkId,
		number: 3,
		state: 'trial',
		reason: null,
		jobId: null,
		isSecondPersonAsked: true,
		stage: 'as-cast',
		revision: { revisionId: id(20), modelName: 'Structure', number: 4, isNewest: true },
		survey: { surveyId: id(21), number: 14, name: 'Columns', surveyedOn: '2026-12-03', setupCount: 1 },
		fits: [{ fitId: id(22), setupId, setupName: 'S1', number: 1, adoptedBy: 'Jo Marsh', checkedBy: null, isNewest: true }],
		sheet: { sheetId: id(23), name: 'C2', revision: 1, decision: 'guarded', isNewest: true },
		summary: { within: 2, outside: 2, 'too-close-to-call': 1, undecided: 0, 'not-measured': 1, 'no-tolerance': 0 },
		madeBy: 'Jo Marsh',
		madeAt: new Date('2026-12-04T09:00:00Z'),
		inputsSha256: 'a'.repeat(64),
		findings: [],
		unmatchedPoints: [],
		elements,
		deviations,
		derived: [],
		...over,
	};
}
