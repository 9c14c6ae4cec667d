import { and, asc, desc, eq, isNotNull, ne } from 'drizzle-orm';
import { standingOf } from '#shared/check/standing.ts';
import type { ShootListEntry } from '#shared/flag/contract.ts';
import { flagKey } from '#shared/flag/plan-flags.ts';
import { shootReason, surveyPointOf } from '#shared/flag/shoot-list.ts';
import { writeFieldCsv } from '#shared/model/write-field-csv.ts';
import { seesEveryPour } from '#shared/pour/pour-sight.ts';
import type { Handle } from '../../db/database.ts';
import { readMeasurements } from '../../db/read-measurements.ts';
import { fits } from '../../db/schema/fit.ts';
import { flags } from '../../db/schema/flag.ts';
import { checkpointChoices, checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import { pourElements, pours } from '../../db/schema/pour.ts';
import { surveyPoints, surveys } from '../../db/schema/survey.ts';
import type { Member } from '../../platform/platform.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';

interface ListedEntry extends ShootListEntry {
	/** Its own name for the field. */
	mark: string;
}

/**
 * What is to be measured next of the newest revisions: checkpoints in no published survey, too close to call, voided, or put right since.
 * What is left out is not asked for. A contractor sees what is of its pours.
 */
export async function shootListOf(db: Handle, member: Member): Promise<ListedEntry[]> {
	const { siteId } = member;
	const standings = new Map(
		standingOf(await readMeasurements(db, { siteId })).map((one) => [`${one.modelId}\n${one.checkpointId}`, one] as const),
	);
	const flagRows = await db
		.select()
		.from(flags)
		.where(and(eq(flags.siteId, siteId), ne(flags.state, 'lapsed')));
	const flagOf = new Map(flagRows.map((row) => [flagKey(row), row]));
	const voided = await voidedNames(db, siteId);
	const poursByElement = await poursOfElements(db, member);
	const seesAll = seesEveryPour(member.roles);
	const list: ListedEntry[] = [];
	for (const { revisionId, modelId } of await newestRevisions(db, siteId)) {
		for (const { checkpoint, element } of await askedCheckpoints(db, revisionId, modelId)) {
			const ofPours = poursByElement.get(`${modelId}\n${element.globalId}`);
			if (!seesAll && ofPours === undefined) continue;
			const flag = flagOf.get(flagKey({ modelId, globalId: element.globalId, kind: checkpoint.characteristic }));
			const standing = standings.get(`${modelId}\n${checkpoint.id}`) ?? null;
			const why = shootReason(standing, {
				isVoided: voided.has(checkpoint.mark.toLowerCase()) || voided.has(checkpoint.id.toLowerCase()),
				isPutRight: flag?.state === 'put-right',
				isAgain: flag?.state === 'decided' && flag.decision?.kind === 'survey-again',
			});
			if (why === null) continue;
			list.push({
				checkpointId: checkpoint.id,
				globalId: element.globalId,
				elementMark: element.mark,
				mark: checkpoint.mark,
				label: checkpoint.label,
				characteristic: checkpoint.characteristic,
				why,
				sigmaMm: flag?.decision?.kind === 'survey-again' ? flag.decision.sigmaMm : null,
				designPoint: [checkpoint.xM, checkpoint.yM, checkpoint.zM],
				pours: ofPours ?? [],
			});
		}
	}
	return list;
}

/** The list for a field controller: the frame of the set-up whose fit is named, else the design frame. */
export async function shootCsvOf(db: Handle, member: Member, fitId: string | null): Promise<File> {
	const list = await shootListOf(db, member);
	if (list.length === 0) throw new Refused('nothing-to-list', 'Nothing is to be measured, so there is nothing to take outside.');
	const fit =
		fitId === null
			? null
			: foundOne(
					await db
						.select({ result: fits.result, number: fits.number })
						.from(fits)
						.where(and(eq(fits.siteId, member.siteId), eq(fits.id, fitId), eq(fits.state, 'adopted'))),
				);
	const rows = list.map(({ mark, checkpointId, designPoint, characteristic }) => ({
		mark: mark === '' ? checkpointId : mark,
		place: designPoint,
		characteristic,
	}));
	const text = fit === null ? writeFieldCsv(rows) : writeFieldCsv(rows, (place) => surveyPointOf(fit.result, place));
	const frame = fit === null ? 'design' : `survey-fit-${fit.number}`;
	return new File([text], `shoot-list-${frame}.csv`, { type: 'text/csv' });
}

async function newestRevisions(db: Handle, siteId: string): Promise<{ revisionId: string; modelId: string }[]> {
	return db
		.selectDistinctOn([revisions.modelId], { revisionId: revisions.id, modelId: revisions.modelId })
		.from(revisions)
		.innerJoin(models, eq(models.id, revisions.modelId))
		.where(and(eq(revisions.siteId, siteId), eq(revisions.state, 'ready')))
		.orderBy(revisions.modelId, desc(revisions.number));
}

async function askedCheckpoints(db: Handle, revisionId: string, modelId: string) {
	const leftOut = await db
		.select({ id: checkpointChoices.checkpointId })
		.from(checkpointChoices)
		.where(and(eq(checkpointChoices.modelId, modelId), eq(checkpointChoices.requirement, 'left-out')));
	const left = new Set(leftOut.map(({ id }) => id));
	const rows = await db
		.select({ checkpoint: checkpoints, element: { globalId: elements.globalId, mark: elements.mark } })
		.from(checkpoints)
		.innerJoin(elements, eq(elements.id, checkpoints.elementId))
		.where(eq(checkpoints.revisionId, revisionId))
		.orderBy(asc(checkpoints.position));
	return rows.filter(({ checkpoint }) => !left.has(checkpoint.id));
}

async function voidedNames(db: Handle, siteId: string): Promise<Set<string>> {
	const rows = await db
		.select({ name: surveyPoints.name })
		.from(surveyPoints)
		.innerJoin(surveys, eq(surveys.id, surveyPoints.surveyId))
		.where(and(eq(surveys.siteId, siteId), isNotNull(surveyPoints.voidedReason)));
	return new Set(rows.map(({ name }) => name.toLowerCase()));
}

/** Numbers of the pours each element is in, as far as the member sees them. */
async function poursOfElements(db: Handle, { siteId, roles, companyIds }: Member): Promise<Map<string, string[]>> {
	const rows = await db
		.select({ modelId: pourElements.modelId, globalId: pourElements.globalId, own: pourElements.companyId, pour: pours })
		.from(pourElements)
		.innerJoin(pours, eq(pours.id, pourElements.pourId))
		.where(eq(pours.siteId, siteId))
		.orderBy(asc(pours.number));
	const found = new Map<string, string[]>();
	for (const { modelId, globalId, own, pour } of rows) {
		const isOwn = companyIds.includes(pour.companyId) || (own !== null && companyIds.includes(own));
		if (!seesEveryPour(roles) && !isOwn) continue;
		const key = `${modelId}\n${globalId}`;
		found.set(key, [...(found.get(key) ?? []), pour.number]);
	}
	return found;
}
