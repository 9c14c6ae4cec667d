import type { Transaction } from '../../db/database.ts';
import { insertRows } from '../../db/insert-rows.ts';
import { surveyPoints } from '../../db/schema/survey.ts';
import type { SurveyColumns } from './read-survey.ts';

/** Inserts the points from `from` up to but not with `to`. */
export async function insertPoints(
	tx: Transaction,
	surveyId: string,
	setupIds: ReadonlyMap<string, string>,
	points: SurveyColumns,
	from = 0,
	to = points.row.length,
): Promise<void> {
	const rows: (typeof surveyPoints.$inferInsert)[] = [];
	for (let index = from; index < Math.min(to, points.row.length); index++) {
		const setupId = setupIds.get(at(points.setup, index));
		if (setupId === undefined) throw new Error(`No set-up is stored for "${points.setup[index]}".`);
		const sigmaM = [0, 1, 2].map((axis) => at(points.sigmaM, 3 * index + axis));
		rows.push({
			surveyId,
			row: at(points.row, index),
			setupId,
			name: at(points.name, index),
			code: at(points.code, index),
			xM: at(points.xyzM, 3 * index),
			yM: at(points.xyzM, 3 * index + 1),
			zM: at(points.xyzM, 3 * index + 2),
			sigmaM: sigmaM.some(Number.isNaN) ? null : sigmaM,
			offsetMm: at(points.offsetMm, index),
		});
	}
	await insertRows(tx, surveyPoints, rows);
}

function at<Value>(values: { readonly [index: number]: Value }, index: number): Value {
	const value = values[index];
	if (value === undefined) throw new Error('The columns of a survey differ in length.');
	return value;
}
