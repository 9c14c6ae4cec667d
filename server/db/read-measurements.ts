import { and, asc, eq, inArray, or } from 'drizzle-orm';
import type { Measurement } from '#shared/check/standing.ts';
import type { Handle } from './database.ts';
import { deviationOf } from './deviation-rows.ts';
import { checkpointOf } from './model-rows.ts';
import { checkFits, checks, deviations } from './schema/check.ts';
import { fits } from './schema/fit.ts';
import { checkpoints, elements, revisions } from './schema/model.ts';
import { sites } from './schema/site.ts';
import { surveys } from './schema/survey.ts';

/** A measurement with what a list says of its element, and when its check was published (null: not yet). */
export interface StoredMeasurement extends Measurement {
	readonly mark: string;
	readonly title: string;
	readonly publishedAt: Date | null;
}

export interface AskedMeasurements {
	readonly siteId: string;
	/** Only these elements; all where absent. */
	readonly globalIds?: readonly string[];
	/** A trial to be read as if it were published. */
	readonly withCheckId?: string;
	/** A published check to be read as if it were withdrawn. */
	readonly withoutCheckId?: string;
}

/** All checkpoints of the site's published checks: what `standingOf` makes the state of each checkpoint from. Oldest check first. */
export async function readMeasurements(db: Handle, asked: AskedMeasurements): Promise<StoredMeasurement[]> {
	const { siteId, globalIds, withCheckId, withoutCheckId } = asked;
	if (globalIds?.length === 0) return [];
	const isAsked = or(eq(checks.state, 'published'), withCheckId === undefined ? undefined : eq(checks.id, withCheckId));
	const heads = await db
		.select({ check: checks, survey: surveys, modelId: revisions.modelId, isSecondAsked: sites.isFitCheckedBySecond })
		.from(checks)
		.innerJoin(surveys, eq(surveys.id, checks.surveyId))
		.innerJoin(revisions, eq(revisions.id, checks.revisionId))
		.innerJoin(sites, eq(sites.id, checks.siteId))
		.where(and(eq(checks.siteId, siteId), isAsked))
		.orderBy(asc(checks.number));
	const standing = heads.filter(({ check }) => check.id !== withoutCheckId);
	if (standing.length === 0) return [];
	const checkIds = standing.map(({ check }) => check.id);
	const carriedBy = await db
		.select({ checkId: checkFits.checkId, setupId: checkFits.setupId, state: fits.state, checkedBy: fits.checkedBy })
		.from(checkFits)
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.where(inArray(checkFits.checkId, checkIds));
	const fitOf = new Map(carriedBy.map((fit) => [`${fit.checkId} ${fit.setupId}`, fit]));
	const found: StoredMeasurement[] = [];
	for (const { check, survey, modelId, isSecondAsked } of standing) {
		const rows = await db
			.select({ deviation: deviations, checkpoint: checkpoints, element: elements })
			.from(deviations)
			.innerJoin(checkpoints, and(eq(checkpoints.revisionId, deviations.revisionId), eq(checkpoints.id, deviations.checkpointId)))
			.innerJoin(elements, eq(elements.id, checkpoints.elementId))
			.where(and(eq(deviations.checkId, check.id), globalIds === undefined ? undefined : inArray(elements.globalId, [...globalIds])))
			.orderBy(asc(deviations.position));
		for (const { deviation, checkpoint, element } of rows) {
			const fit = deviation.setupId === null ? undefined : fitOf.get(`${check.id} ${deviation.setupId}`);
			found.push({
				checkId: check.id,
				checkNumber: check.number,
				surveyId: survey.id,
				surveyNumber: survey.number,
				surveyName: survey.name,
				measuredAt: Date.parse(survey.surveyedOn),
				stage: check.stage,
				modelId,
				globalId: element.globalId,
				isFitAdopted: fit === undefined || fit.state === 'adopted',
				isFitChecked: fit === undefined || fit.checkedBy !== null || !isSecondAsked,
				deviation: deviationOf(deviation, checkpointOf(checkpoint, element)),
				mark: element.mark,
				title: element.title,
				publishedAt: check.publishedAt,
			});
		}
	}
	return found;
}
