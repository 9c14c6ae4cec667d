import { readFile } from 'node:fs/promises';
import type { PointField, PointTableReading } from '#shared/survey/point-table-schema.ts';
import type { Stage } from '#shared/tolerance/sheet-schema.ts';
import { toleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import type { DemoPeople } from './people.ts';
import { actingAs, asUpload, type DemoClient, ended } from './stage.ts';

/** What the site was given: its sheet, model and control, and how a survey becomes a published check. */

export interface DemoGround {
	platform: Platform;
	people: DemoPeople;
	modelId: string;
	revisionId: string;
	controlSetId: string;
	sheetId: string;
	/** A person's routes at a time. */
	as: (member: Member, at: Date) => DemoClient;
}

interface DemoSurvey {
	fileName: string;
	name: string;
	stage: Stage;
	surveyedOn: string;
	setups: readonly string[];
}

/** Sheet, model and control, brought by those who bring them. */
export async function layGround(platform: Platform, people: DemoPeople, at: Date): Promise<DemoGround> {
	const { siteId, siteEngineer, projectEngineer } = people;
	const as = (member: Member, when: Date) => actingAs(platform, member, when);
	const project = as(projectEngineer, at);
	const sheet = toleranceSheet.parse(JSON.parse(await readFile('fixtures/demo/tolerances.json', 'utf8')));
	const draft = await project.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet });
	const reason = 'Invented limits for the demo site.';
	await project.tolerance.issue({ siteId, sheetId: draft.sheetId, seenSha256: draft.contentSha256, reason });

	const modelUpload = await asUpload(platform, projectEngineer, 'pump-house.ifc', at);
	const { revisionId, jobId } = await project.model.read({ siteId, uploadId: modelUpload, model: { newName: 'Structure' } });
	await ended(platform, jobId);
	const [model] = await project.model.list({ siteId });
	if (model === undefined) throw new Error('The demo has no model.');

	const control = await as(siteEngineer, at).control.store({
		siteId,
		uploadId: await asUpload(platform, siteEngineer, 'control-map.csv', at),
		name: 'Site control',
		frame: 'map',
		reading: readingOf(['name', 'easting', 'northing', 'height', 'sigmaPlan', 'sigmaHeight']),
		defaultSigmaM: null,
	});
	return { platform, people, modelId: model.modelId, revisionId, controlSetId: control.controlSetId, sheetId: draft.sheetId, as };
}

/** Stores a survey. Levelled set-ups that bring their own scale, common part 0.5 mm. */
export async function bringSurvey({ platform, people, as }: DemoGround, survey: DemoSurvey, at: Date): Promise<string> {
	const { siteId, siteEngineer } = people;
	const { fileName, setups, ...said } = survey;
	const { surveyId } = await as(siteEngineer, at).survey.store({
		siteId,
		uploadId: await asUpload(platform, siteEngineer, fileName, at),
		reading: readingOf(['setup', 'name', 'easting', 'northing', 'height', 'sigmaX', 'sigmaY', 'sigmaZ', 'offsetMm', 'code']),
		survey: { ...said, observer: 'Jo Marsh', instrument: 'total station, 1″ (invented)', serial: 'demo 0417' },
		setups: setups.map((name) => ({
			name,
			levelling: 'levelled',
			bringsScale: true,
			pointSigmaM: null,
			commonMm: 0.5,
			instrumentHeightM: null,
		})),
	});
	return surveyId;
}

/** Fits each set-up by itself, adopts it, and has the second engineer check it. */
export async function tie({ people, controlSetId, as }: DemoGround, surveyId: string, at: Date): Promise<void> {
	const { siteId, siteEngineer, secondEngineer } = people;
	const first = as(siteEngineer, at);
	const { setups } = await first.survey.get({ siteId, surveyId });
	for (const { setupId } of setups) {
		const { fitId } = await first.fit.make({ siteId, setupId, controlSetId, kind: 'levelled', knownScale: null, shelves: [] });
		await first.fit.adopt({ siteId, fitId, reason: 'Residuals agree with the instrument’s σ (demo).' });
		const note = 'Names, heights and residuals gone through against the field book (demo).';
		await as(secondEngineer, at).fit.confirm({ siteId, fitId, note });
	}
}

/** Checks a tied survey; a trial until it is published. */
export async function check({ platform, people, revisionId, sheetId, as }: DemoGround, surveyId: string, at: Date): Promise<string> {
	const { siteId, siteEngineer } = people;
	const { checkId, jobId } = await as(siteEngineer, at).check.run({ siteId, revisionId, surveyId, sheetId });
	await ended(platform, jobId);
	return checkId;
}

export async function publish({ people, as }: DemoGround, checkId: string, at: Date): Promise<void> {
	const { siteId, siteEngineer } = people;
	const client = as(siteEngineer, at);
	const { answerBy, planSha256 } = await client.check.publishPlan({ siteId, checkId });
	await client.check.publish({ siteId, checkId, answerBy, planSha256 });
}

/** Columns in the file's order, metres, decimal point, a header. */
function readingOf(fields: readonly PointField[]): PointTableReading {
	const columns = Object.fromEntries(fields.map((field, index) => [field, index]));
	return { encoding: 'utf-8', delimiter: ',', decimalMark: '.', hasHeader: true, unit: 'm', columns };
}
