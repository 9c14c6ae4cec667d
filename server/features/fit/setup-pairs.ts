import { and, asc, eq, isNull } from 'drizzle-orm';
import type { PairsOfSetup, Relabelling } from '#shared/fit/contract.ts';
import { levelRunFindings } from '#shared/survey/level-run.ts';
import type { Handle } from '../../db/database.ts';
import { vectorOf } from '../../db/model-rows.ts';
import { controlPoints, controlSets } from '../../db/schema/control.ts';
import { setups, surveyPoints, surveys } from '../../db/schema/survey.ts';
import { foundOne, Refused } from '../../platform/refuse.ts';
import { pairTargets, type SetupPoint, type UnknownTarget, unknownTargets } from './pair-targets.ts';

export interface SetupAndControl {
	siteId: string;
	setupId: string;
	controlSetId: string;
	relabellings?: readonly Relabelling[] | undefined;
}

/** A set-up's pairs against a control set, with the hashes of the files that both came from. */
export interface SetupPairs {
	pairs: PairsOfSetup;
	/** Targets that no control point is named like: they may tie this set-up to others. */
	unknown: UnknownTarget[];
	surveyId: string;
	setupName: string;
	levelling: 'levelled' | 'free';
	bringsScale: boolean;
	surveyFileSha256: string;
	controlFileSha256: string;
}

/** Reads both of the site and pairs them; NOT_FOUND for another site's, refused while the survey is not stored whole. */
export async function setupPairs(db: Handle, { siteId, setupId, controlSetId, relabellings = [] }: SetupAndControl): Promise<SetupPairs> {
	const { setup, survey } = foundOne(
		await db
			.select({ setup: setups, survey: surveys })
			.from(setups)
			.innerJoin(surveys, eq(surveys.id, setups.surveyId))
			.where(and(eq(setups.siteId, siteId), eq(setups.id, setupId))),
	);
	const control = foundOne(
		await db
			.select()
			.from(controlSets)
			.where(and(eq(controlSets.siteId, siteId), eq(controlSets.id, controlSetId))),
	);
	if (survey.state !== 'ready') {
		throw new Refused(
			'survey-not-ready',
			survey.reason ?? 'The points of this survey are still being stored. Wait for it, then fit.',
			'setupId',
		);
	}
	const marks = await db
		.select()
		.from(controlPoints)
		.where(and(eq(controlPoints.controlSetId, controlSetId), eq(controlPoints.state, 'in-use')))
		.orderBy(asc(controlPoints.name));
	const points = await db
		.select()
		.from(surveyPoints)
		.where(and(eq(surveyPoints.setupId, setupId), isNull(surveyPoints.voidedReason)))
		.orderBy(asc(surveyPoints.row));
	expectRelabellings(
		relabellings,
		points.map(({ name }) => name),
		marks.map(({ name }) => name),
	);
	const { pointSigmaPlanM: plan, pointSigmaHeightM: height } = setup;
	const setupSigmaM = plan === null || height === null ? null : ([plan, plan, height] as const);
	const sighted = points.map(
		({ name, row, code, xM, yM, zM, sigmaM }): SetupPoint => ({
			name,
			row,
			code,
			surveyM: [xM, yM, zM],
			sigmaM: sigmaM === null ? setupSigmaM : vectorOf(sigmaM),
		}),
	);
	const known = marks.map(({ name, designXM, designYM, designZM, sigmaPlanM, sigmaHeightM }) => ({
		name,
		designM: [designXM, designYM, designZM] as const,
		sigmaPlanM,
		sigmaHeightM,
	}));
	const paired = pairTargets(sighted, known, relabellings);
	const findings = [...(paired.findings ?? []), ...levelRunFindings(setup.observation)];
	return {
		pairs: { setupId, controlSetId, ...paired, ...(findings.length > 0 ? { findings } : {}) },
		unknown: unknownTargets(sighted, known, relabellings),
		surveyId: survey.id,
		setupName: setup.name,
		levelling: setup.levelling,
		bringsScale: setup.bringsScale,
		surveyFileSha256: survey.fileSha256,
		controlFileSha256: control.fileSha256,
	};
}

/** Each names a target and a mark that are there, each once. */
function expectRelabellings(relabellings: readonly Relabelling[], targets: readonly string[], marks: readonly string[]): void {
	for (const [index, { target, mark }] of relabellings.entries()) {
		const where = `relabellings.${index}`;
		const earlier = relabellings.slice(0, index);
		if (!targets.includes(target)) throw new Refused('no-such-target', `“${target}” is no point of this set-up.`, where);
		if (!marks.includes(mark)) throw new Refused('no-such-mark', `“${mark}” is no control point in use.`, where);
		if (earlier.some((one) => one.target === target)) throw new Refused('target-twice', `“${target}” is taken for two marks.`, where);
		if (earlier.some((one) => one.mark === mark)) throw new Refused('mark-twice', `Two targets are taken for “${mark}”.`, where);
	}
}
