import { and, eq, inArray, isNotNull, ne } from 'drizzle-orm';
import { type CheckpointStanding, standingOf } from '#shared/check/standing.ts';
import { isAfterTheConcrete } from '#shared/pour/after-the-concrete.ts';
import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { type PourCheckpoint, type Readiness, readinessOf } from '#shared/pour/readiness.ts';
import { canonicalJson } from '#shared/record/canonical-json.ts';
import type { RecordedCheckpoint, ShownPour } from '#shared/record/sealed-record.ts';
import type { Stage } from '#shared/tolerance/sheet-schema.ts';
import type { Handle } from '../../db/database.ts';
import { readMeasurements } from '../../db/read-measurements.ts';
import { users } from '../../db/schema/account.ts';
import { checkpointChoices } from '../../db/schema/model.ts';
import { holdPoints, pourElements, pours, witnessPoints } from '../../db/schema/pour.ts';
import { companies, sites } from '../../db/schema/site.ts';
import { surveyPoints } from '../../db/schema/survey.ts';
import { sheets } from '../../db/schema/tolerance.ts';
import { foundOne } from '../../platform/refuse.ts';
import { limitsByIssued } from './issued-limits.ts';
import { designedElements, type PourModel, pourModels } from './pour-design.ts';
import { pourFlags } from './pour-flags.ts';
import { type PourInputs, pourInputs } from './pour-inputs.ts';

const stagesOf: Record<HoldPointKind, readonly Stage[]> = {
	'before-pour': ['before-pour'],
	'after-pour': ['as-cast-shored', 'as-cast', 'later'],
};

export interface LoadedPour {
	shown: ShownPour;
	readiness: Readiness;
	preparedBy: PourInputs['preparedBy'];
	isListAnswered: boolean;
}

/** Everything of a pour's hold point as it stands now: what is shown, and, signed, what is sealed. The same rows give the same text. */
export async function loadShown(db: Handle, siteId: string, pourId: string, kind: HoldPointKind): Promise<LoadedPour> {
	const { pour, company, isFitCheckedBySecond } = foundOne(
		await db
			.select({ pour: pours, company: companies.name, isFitCheckedBySecond: sites.isFitCheckedBySecond })
			.from(pours)
			.innerJoin(companies, eq(companies.id, pours.companyId))
			.innerJoin(sites, eq(sites.id, pours.siteId))
			.where(and(eq(pours.siteId, siteId), eq(pours.id, pourId))),
	);
	const point = foundOne(
		await db
			.select()
			.from(holdPoints)
			.where(and(eq(holdPoints.pourId, pourId), eq(holdPoints.kind, kind))),
	);
	const rows = await db.select().from(pourElements).where(eq(pourElements.pourId, pourId));
	const models = await pourModels(db, siteId, rows);
	const globalIds = [...new Set(rows.map(({ globalId }) => globalId))];
	const stages = stagesOf[kind];
	const measurements = (await readMeasurements(db, { siteId, globalIds })).filter(({ stage }) => stages.includes(stage));
	const standings = new Map(standingOf(measurements).map((one) => [`${one.modelId} ${one.checkpointId}`, one]));
	const choices = await choicesOf(db, models);
	const own = models.flatMap((model) =>
		[...model.elements.values()].flatMap((designed) => designed.checkpoints.map((row) => ({ model, designed, row }))),
	);
	const used = own.flatMap(({ model, row }) => standings.get(`${model.modelId} ${row.id}`) ?? []);
	const inputs = await pourInputs(db, siteId, [...new Set(used.map(({ newest }) => newest.checkId))]);
	const changes = await changesSince(db, { siteId, models, used, inputs });
	const flags = await pourFlags(db, siteId, models);
	const facts = own.map(({ model, designed, row }): PourCheckpoint & { leftOutBy: string; leftOutReason: string } => {
		const choice = choices.get(`${model.modelId} ${row.id}`);
		const standing = standings.get(`${model.modelId} ${row.id}`) ?? null;
		const { globalId, mark, title } = designed.element;
		return {
			modelId: model.modelId,
			globalId,
			checkpointId: row.id,
			characteristic: row.characteristic,
			mark: title || mark,
			requirement: choice?.requirement ?? 'required',
			isAfterConcrete: isAfterTheConcrete({ ...row, elementClass: designed.element.class }, kind),
			standing,
			isVoided: standing !== null && changes.isVoided(standing),
			isLimitChanged: standing !== null && changes.isLimitChanged(standing),
			isDesignMoved: standing !== null && changes.isDesignMoved(standing),
			leftOutBy: choice?.by ?? '',
			leftOutReason: choice?.reason ?? '',
		};
	});
	const readiness = readinessOf({
		checkpoints: facts,
		flags: flags.alive,
		goneMarks: models.flatMap(({ gone }) => gone),
		isFitCheckedBySecond,
	});
	const labelOf = new Map(own.map(({ model, row }) => [`${model.modelId} ${row.id}`, row]));
	const asked = facts.filter(({ isAfterConcrete }) => !isAfterConcrete);
	const afterConcrete = facts.filter(({ isAfterConcrete }) => isAfterConcrete);
	const counted = asked.filter(({ requirement }) => requirement !== 'left-out');
	const companyNames = await companyNamesOf(db, siteId);
	const shown: ShownPour = {
		pour: {
			pourId,
			number: pour.number,
			name: pour.name,
			company,
			plannedAt: pour.plannedAt?.toISOString() ?? null,
			holdPoint: kind,
			calledBy: await nameOf(db, point.calledBy),
			submittedBy: await nameOf(db, point.submittedBy),
			list: point.list,
			witnessed: await witnessedOf(db, pourId),
		},
		isFitCheckedBySecond,
		isReady: readiness.isReady,
		readiness: readiness.sentences.map(({ text }) => text),
		carriedOver: changes.carriedOver,
		elements: models.flatMap((model) =>
			[...model.elements.values()].map(({ element, designSha256 }) => {
				const companyId =
					rows.find(({ modelId, globalId }) => modelId === model.modelId && globalId === element.globalId)?.companyId ?? null;
				return {
					modelId: model.modelId,
					modelName: model.modelName,
					globalId: element.globalId,
					class: element.class,
					mark: element.mark,
					title: element.title,
					storey: element.storey,
					company: companyId === null ? null : (companyNames.get(companyId) ?? null),
					designSha256,
				};
			}),
		),
		checkpoints: counted.map((fact) => recordedCheckpoint(fact, labelOf.get(`${fact.modelId} ${fact.checkpointId}`), inputs)),
		...(afterConcrete.length > 0 && {
			afterConcrete: afterConcrete.map(({ modelId, checkpointId, globalId, mark }) => ({
				modelId,
				checkpointId,
				globalId,
				label: `${mark}: ${labelOf.get(`${modelId} ${checkpointId}`)?.label ?? ''}`,
			})),
		}),
		leftOut: asked
			.filter(({ requirement }) => requirement === 'left-out')
			.map(({ modelId, checkpointId, globalId, leftOutReason, leftOutBy, mark }) => ({
				modelId,
				checkpointId,
				globalId,
				label: `${mark}: ${labelOf.get(`${modelId} ${checkpointId}`)?.label ?? ''}`,
				reason: leftOutReason,
				by: leftOutBy,
			})),
		flags: flags.recorded,
		checks: inputs.checks.map(({ recorded }) => recorded),
	};
	return {
		shown,
		readiness,
		preparedBy: inputs.preparedBy,
		isListAnswered: point.list.every(({ answer }) => answer !== null && answer.trim() !== ''),
	};
}

/** The one text whose hash goes with the request to sign. */
export function shownText(shown: ShownPour): string {
	return canonicalJson(shown);
}

function recordedCheckpoint(
	{ modelId, checkpointId, globalId, mark, requirement, standing, characteristic }: PourCheckpoint,
	row: { label: string; xM: number; yM: number; zM: number; normal: number[] | null } | undefined,
	inputs: PourInputs,
): RecordedCheckpoint {
	const newest = standing?.newest ?? null;
	const deviation = newest?.deviation ?? null;
	const decision = inputs.checks.find(({ checkId }) => checkId === newest?.checkId)?.recorded.sheet.decision ?? null;
	return {
		modelId,
		checkpointId,
		globalId,
		label: `${mark}: ${row?.label ?? ''}`,
		characteristic,
		requirement,
		place: deviation?.place ?? [row?.xM ?? 0, row?.yM ?? 0, row?.zM ?? 0],
		direction: deviation?.direction ?? null,
		check: newest?.checkNumber ?? null,
		decision,
		rule: deviation?.ruleId ?? null,
		measured: deviation?.measured ?? null,
		notMeasuredReason: deviation === null ? 'no published check asked for it' : deviation.notMeasuredReason,
		deviationMm: deviation?.deviationMm ?? null,
		offsetMm: deviation?.offsetMm ?? null,
		covarianceMm2: deviation?.covarianceMm2 ?? null,
		expandedUncertaintyMm: deviation?.expandedUncertaintyMm ?? null,
		limitsMm: deviation?.limitsMm ?? null,
		boxYawRad: deviation?.boxYawRad ?? null,
		verdict: deviation?.verdict ?? 'not-measured',
		beyondMm: deviation?.beyondMm ?? null,
		conformity: deviation?.conformity ?? null,
	};
}

interface Changes {
	isVoided: (standing: CheckpointStanding) => boolean;
	isLimitChanged: (standing: CheckpointStanding) => boolean;
	isDesignMoved: (standing: CheckpointStanding) => boolean;
	carriedOver: string[];
}

/** What is newer than the figures: points voided, another sheet issued, another revision; and whether it touches any of them. */
async function changesSince(
	db: Handle,
	{
		siteId,
		models,
		used,
		inputs,
	}: { siteId: string; models: readonly PourModel[]; used: readonly CheckpointStanding[]; inputs: PourInputs },
): Promise<Changes> {
	const setupIds = [...new Set(used.flatMap(({ newest }) => newest.deviation.setupId ?? []))];
	const voided =
		setupIds.length === 0
			? []
			: await db
					.select({ setupId: surveyPoints.setupId, name: surveyPoints.name })
					.from(surveyPoints)
					.where(and(inArray(surveyPoints.setupId, setupIds), isNotNull(surveyPoints.voidedReason)));
	const voidedNames = new Set(voided.map(({ setupId, name }) => `${setupId} ${name}`));
	const [issued] = await db
		.select()
		.from(sheets)
		.where(and(eq(sheets.siteId, siteId), eq(sheets.state, 'issued')));
	const inputOf = new Map(inputs.checks.map((check) => [check.checkId, check]));
	const limitChanged = new Set<CheckpointStanding>();
	const moved = new Set<CheckpointStanding>();
	const said: string[] = [];
	for (const model of models) {
		const own = used.filter(({ modelId }) => modelId === model.modelId);
		const byOther = own.filter(({ newest }) => issued !== undefined && inputOf.get(newest.checkId)?.sheetId !== issued.id);
		if (issued !== undefined && byOther.length > 0) {
			const isOther = await limitsByIssued(db, issued.sheet, model);
			for (const standing of byOther) {
				const element = model.elements.get(standing.globalId)?.element;
				const decision = inputOf.get(standing.newest.checkId)?.recorded.sheet.decision ?? issued.sheet.decision;
				if (element !== undefined && isOther(element, standing.newest.deviation, standing.newest.stage, decision))
					limitChanged.add(standing);
			}
			if (byOther.every((standing) => !limitChanged.has(standing)))
				said.push(`Revision ${issued.revision} of the tolerance sheet changes none of its limits.`);
		}
		const oldRevisions = new Set(
			own.flatMap(({ newest }) => inputOf.get(newest.checkId)?.revisionId ?? []).filter((id) => id !== model.revision.id),
		);
		for (const revisionId of oldRevisions) {
			const before = await designedElements(db, revisionId, [...model.elements.keys()]);
			for (const standing of own) {
				if (inputOf.get(standing.newest.checkId)?.revisionId !== revisionId) continue;
				if (before.get(standing.globalId)?.designSha256 !== model.elements.get(standing.globalId)?.designSha256) moved.add(standing);
			}
		}
		if (oldRevisions.size > 0 && own.every((standing) => !moved.has(standing)))
			said.push(`${model.modelName} rev ${model.revision.number} changes none of its ${model.elements.size} elements.`);
	}
	return {
		isVoided: ({ newest: { deviation } }) => deviation.setupId !== null && voidedNames.has(`${deviation.setupId} ${deviation.pointName}`),
		isLimitChanged: (standing) => limitChanged.has(standing),
		isDesignMoved: (standing) => moved.has(standing),
		carriedOver: said,
	};
}

async function choicesOf(db: Handle, models: readonly PourModel[]) {
	const modelIds = models.map(({ modelId }) => modelId);
	if (modelIds.length === 0)
		return new Map<string, { requirement: 'required' | 'by-sample' | 'left-out'; reason: string | null; by: string }>();
	const rows = await db
		.select({
			modelId: checkpointChoices.modelId,
			checkpointId: checkpointChoices.checkpointId,
			requirement: checkpointChoices.requirement,
			reason: checkpointChoices.reason,
			by: users.name,
		})
		.from(checkpointChoices)
		.innerJoin(users, eq(users.id, checkpointChoices.chosenBy))
		.where(and(inArray(checkpointChoices.modelId, modelIds), ne(checkpointChoices.requirement, 'required')));
	return new Map(rows.map((row) => [`${row.modelId} ${row.checkpointId}`, row]));
}

async function witnessedOf(db: Handle, pourId: string): Promise<ShownPour['pour']['witnessed']> {
	const rows = await db.select().from(witnessPoints).where(eq(witnessPoints.pourId, pourId)).orderBy(witnessPoints.at);
	return rows.map(({ what, at, hasCome, note }) => ({ what, at: at.toISOString(), came: hasCome, note }));
}

async function nameOf(db: Handle, userId: string | null): Promise<string | null> {
	if (userId === null) return null;
	const [user] = await db.select({ name: users.name }).from(users).where(eq(users.id, userId));
	return user?.name ?? null;
}

async function companyNamesOf(db: Handle, siteId: string): Promise<Map<string, string>> {
	const rows = await db.select({ id: companies.id, name: companies.name }).from(companies).where(eq(companies.siteId, siteId));
	return new Map(rows.map(({ id, name }) => [id, name]));
}
