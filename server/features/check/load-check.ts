import { and, asc, eq } from 'drizzle-orm';
import type { CheckInput } from '#shared/check/check-input.ts';
import type { FitNetwork } from '#shared/fit/network-schema.ts';
import { gridYawRad } from '#shared/model/grid-yaw.ts';
import { matchMarks } from '#shared/survey/match-marks.ts';
import type { Handle } from '../../db/database.ts';
import { checkpointOf, elementOf, vectorOf } from '../../db/model-rows.ts';
import { checkFits, type checks } from '../../db/schema/check.ts';
import { controlPoints } from '../../db/schema/control.ts';
import { fitNetworks, fits } from '../../db/schema/fit.ts';
import { checkpoints, elements, models, revisions } from '../../db/schema/model.ts';
import { buildings } from '../../db/schema/site.ts';
import { setups, surveyPoints } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { foundOne } from '../../platform/refuse.ts';

/** A check's input for the engine, and what it leaves out: the set-ups that have no adopted fit, with how many points of theirs. */
export interface LoadedCheck {
	input: CheckInput;
	withoutFit: { name: string; pointCount: number }[];
}

/** Reads all that a check rests on. Targets are left out: they are control, not work. */
export async function loadCheck(db: Handle, check: typeof checks.$inferSelect): Promise<LoadedCheck> {
	const { revision, buildingName } = foundOne(
		await db
			.select({ revision: revisions, buildingName: buildings.name })
			.from(revisions)
			.innerJoin(models, eq(models.id, revisions.modelId))
			.leftJoin(buildings, eq(buildings.id, models.buildingId))
			.where(eq(revisions.id, check.revisionId)),
	);
	const { sheet } = foundOne(await db.select({ sheet: sheets.sheet }).from(sheets).where(eq(sheets.id, check.sheetId)));
	const carriedBy = await db
		.select({ setup: setups, result: fits.result, controlSetId: fits.controlSetId, relabellings: fits.relabellings, network: fitNetworks })
		.from(checkFits)
		.innerJoin(setups, eq(setups.id, checkFits.setupId))
		.innerJoin(fits, eq(fits.id, checkFits.fitId))
		.leftJoin(fitNetworks, eq(fitNetworks.id, fits.networkId))
		.where(eq(checkFits.checkId, check.id))
		.orderBy(asc(setups.name));
	const allSetups = await db.select().from(setups).where(eq(setups.surveyId, check.surveyId)).orderBy(asc(setups.name));
	const rows = await db.select().from(surveyPoints).where(eq(surveyPoints.surveyId, check.surveyId)).orderBy(asc(surveyPoints.row));
	const targets = new Map<string, ReadonlySet<string>>();
	for (const { setup, controlSetId, relabellings, network } of carriedBy) {
		const names = rows.flatMap(({ setupId, name }) => (setupId === setup.id ? [name] : []));
		const marks = await db.select({ name: controlPoints.name }).from(controlPoints).where(eq(controlPoints.controlSetId, controlSetId));
		const matched = matchMarks(
			names,
			// Targets that tied set-ups together are control too.
			[...new Set([...marks.map(({ name }) => name), ...(network?.network.ties.map(({ mark }) => mark) ?? [])])],
		);
		// What the fit took for a mark is control, however it is named.
		targets.set(setup.id, new Set([...matched.keys(), ...relabellings.map(({ target }) => target)]));
	}
	const used = rows.filter(({ setupId, name }) => targets.has(setupId) && targets.get(setupId)?.has(name) !== true);
	const withoutFit = allSetups
		.filter(({ id }) => !targets.has(id))
		.map(({ id, name }) => ({
			name,
			pointCount: rows.filter(({ setupId, voidedReason }) => setupId === id && voidedReason === null).length,
		}))
		.filter(({ pointCount }) => pointCount > 0);
	const elementRows = await db.select().from(elements).where(eq(elements.revisionId, check.revisionId)).orderBy(asc(elements.entityNumber));
	const read = elementRows.map(elementOf);
	const byId = new Map(read.map((element) => [element.elementId, element]));
	const checkpointRows = await db
		.select()
		.from(checkpoints)
		.where(and(eq(checkpoints.revisionId, check.revisionId)))
		.orderBy(asc(checkpoints.position));
	const leftOut = new Set(check.leftOut?.map(({ checkpointId }) => checkpointId));
	const asked = checkpointRows.filter(({ id }) => !leftOut.has(id));
	return {
		input: {
			elements: read.map(({ elementId, class: ifcClass, name, tag, storey, mark, title, sizesM }) => ({
				id: elementId,
				class: ifcClass,
				name,
				tag,
				storey,
				mark,
				title,
				sizesM,
			})),
			checkpoints: asked.map((row) => checkpointOf(row, foundOne([byId.get(row.elementId)].filter((one) => one !== undefined)))),
			setups: carriedBy.map(({ setup, result, network }) => ({
				id: setup.id,
				name: setup.name,
				fit: result,
				tiedTo: carriedBy.flatMap((other) =>
					other.setup.id !== setup.id && network !== null && other.network?.id === network.id
						? tieBetween(network.network, setup.id, other.setup.id)
						: [],
				),
				commonMm: setup.commonMm,
				pointSigmaM:
					setup.pointSigmaPlanM === null || setup.pointSigmaHeightM === null
						? null
						: [setup.pointSigmaPlanM, setup.pointSigmaPlanM, setup.pointSigmaHeightM],
			})),
			points: used.map(({ name, setupId, xM, yM, zM, sigmaM, offsetMm, code, voidedReason }) => ({
				name,
				setupId,
				surveyPoint: [xM, yM, zM],
				sigmaM: sigmaM === null ? null : vectorOf(sigmaM),
				offsetMm,
				code,
				voided: voidedReason !== null,
			})),
			sheet,
			stage: check.stage,
			...(buildingName === null ? {} : { building: buildingName }),
			gridYawRad: gridYawRad(revision.reading?.grid ?? []),
		},
		withoutFit,
	};
}

/** The block of Q between two set-ups that were adjusted together, rows the first one's unknowns. */
function tieBetween({ between }: FitNetwork, setupId: string, otherId: string): { setupId: string; covariance: number[][] }[] {
	return between.flatMap(({ a, b, covariance }) => {
		if (a === setupId && b === otherId) return [{ setupId: otherId, covariance }];
		if (b !== setupId || a !== otherId) return [];
		return [{ setupId: otherId, covariance: (covariance[0] ?? []).map((_, column) => covariance.map((row) => row[column]!)) }];
	});
}
