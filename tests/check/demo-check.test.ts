import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { CheckInput, CheckInputCheckpoint } from '#shared/check/check-input.ts';
import { rejudge } from '#shared/check/rejudge.ts';
import { runCheck } from '#shared/check/run-check.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { inspectPointTable } from '#shared/survey/inspect-point-table.ts';
import { type PointRow, readPointTable } from '#shared/survey/read-point-table.ts';
import { anElement, aSheet, fitOf } from './measured-world.ts';

/** The invented pump house from its files to its deviations, against the truth that its surveys were made from. */
const demo = (name: string): Buffer => readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url));

function rowsOf(name: string): PointRow[] {
	const bytes = new Uint8Array(demo(name));
	const inspected = inspectPointTable(bytes);
	if ('refused' in inspected) throw new Error(inspected.refused);
	expect(inspected.needs).toEqual([]);
	const table = readPointTable(
		bytes,
		{ ...inspected, unit: 'm', columns: inspected.proposed },
		{ mayLackCoordinates: name.startsWith('control') },
	);
	expect(table.faults).toEqual([]);
	return table.rows;
}

interface Truth {
	'survey-1': { shots: { setup: string; name: string; checkpointId: string; deviationMm?: number; offsetMm?: [number, number] }[] };
}

const control = new Map(rowsOf('control-design.csv').map((row) => [row.name, row]));
const survey = rowsOf('survey-1.csv');
const checkpoints = (
	JSON.parse(demo('checkpoints.json').toString()) as (Omit<CheckInputCheckpoint, 'elementId' | 'label'> & {
		globalId: string;
		label?: string;
	})[]
).map((given): CheckInputCheckpoint => ({ ...given, elementId: given.globalId, label: given.label ?? '' }));
// A checkpoint's mark is its element's and what it is of: "BC1-G-1.H".
const elements = [...new Map(checkpoints.map(({ elementId, mark }) => [elementId, mark.split('.')[0]!]))].map(([id, mark]) =>
	anElement({ id, mark }),
);
const setups = [...new Set(survey.map(({ setup }) => setup))].map((name) => {
	const targets = survey.filter((row) => row.setup === name && control.has(row.name));
	const once = targets.filter((row, index) => targets.findIndex((other) => other.name === row.name) === index);
	const pairs = once.map((row) => {
		const mark = control.get(row.name)!;
		return {
			name: row.name,
			survey: row.xyzM as Vector3,
			control: mark.xyzM as Vector3,
			surveySigma: row.sigmaM as Vector3,
			controlSigma: mark.sigmaM as Vector3,
		};
	});
	return {
		id: name,
		name,
		fit: fitOf({
			fit: 'levelled',
			pairs: pairs.map((pair) => ({
				...pair,
				survey: [...pair.survey],
				control: [...pair.control],
				surveySigma: [...pair.surveySigma],
				controlSigma: [...pair.controlSigma],
			})),
		}),
		commonMm: 0.5,
		pointSigmaM: null,
	};
});
const input: CheckInput = {
	elements,
	checkpoints,
	setups,
	points: survey
		.filter((row) => !control.has(row.name))
		.map((row) => ({
			name: row.name,
			setupId: row.setup,
			surveyPoint: row.xyzM as Vector3,
			sigmaM: row.sigmaM as Vector3 | null,
			offsetMm: row.offsetMm ?? 0,
			code: row.code,
		})),
	sheet: aSheet(),
	stage: 'as-cast',
};
const output = runCheck(input);
const shots = (JSON.parse(demo('truth.json').toString()) as Truth)['survey-1'].shots;

describe('the pump house, survey 1', () => {
	it('meets what was shot, and nothing else', () => {
		const shot = new Set(shots.map(({ checkpointId }) => checkpointId));
		const measured = output.deviations.filter(({ deviationMm }) => deviationMm !== null);
		expect(measured.every(({ checkpointId }) => shot.has(checkpointId))).toBe(true);
		expect(measured).toHaveLength(shot.size);
		const names = new Map(shots.map((one) => [`${one.setup} ${one.name} ${one.checkpointId}`, one]));
		for (const { setupId, pointName, checkpointId } of measured) expect(names.has(`${setupId} ${pointName} ${checkpointId}`)).toBe(true);
	});
	it('gives every verdict again from the figures kept with it', () => {
		for (const deviation of output.deviations) {
			expect(rejudge(deviation, 'guarded')).toEqual({
				verdict: deviation.verdict,
				conformity: deviation.conformity,
				beyondMm: deviation.beyondMm,
			});
		}
	});
	it('is wrong by what it says: U holds the truth in 95 of 100', () => {
		const truth = new Map(shots.map((one) => [`${one.setup} ${one.checkpointId}`, one]));
		let inside = 0;
		let all = 0;
		let squares = 0;
		for (const deviation of output.deviations) {
			if (deviation.deviationMm === null) continue;
			const real = truth.get(`${deviation.setupId} ${deviation.checkpointId}`)!;
			const parts = deviation.standardUncertaintyPartsMm!;
			if (deviation.offsetMm !== null) {
				const [e, n] = [0, 1].map((axis) => deviation.offsetMm![axis]! - real.offsetMm![axis]!) as [number, number];
				all += 1;
				if (Math.hypot(e, n) < 1.225 * deviation.expandedUncertaintyMm!) inside += 1;
				continue;
			}
			const error = deviation.deviationMm - real.deviationMm!;
			all += 1;
			squares += (error / Math.hypot(parts.fit!, parts.point!, parts.common)) ** 2;
			if (Math.abs(error) <= deviation.expandedUncertaintyMm!) inside += 1;
		}
		expect(inside / all).toBeGreaterThan(0.93);
		expect(inside / all).toBeLessThan(0.995);
		expect(squares / all).toBeLessThan(1.2);
		expect(squares / all).toBeGreaterThan(0.6);
	});
});
