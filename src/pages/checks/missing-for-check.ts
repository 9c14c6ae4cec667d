import type { z } from 'zod';
import type { modelSummary, RevisionSummary } from '#shared/model/contract.ts';
import type { SurveySummary } from '#shared/survey/contract.ts';
import type { SheetSummary } from '#shared/tolerance/contract.ts';

type ModelSummary = z.infer<typeof modelSummary>;

/** A revision that can be checked against, with its model's name. */
export interface CheckableRevision extends RevisionSummary {
	readonly modelName: string;
	readonly isNewest: boolean;
}

/** What a check lacks, in words, and the page that helps, below the site. */
export interface Missing {
	readonly sentence: string;
	readonly path: string;
	readonly word: string;
	/** Without it there can be no check at all; else only part of the survey counts. */
	readonly isBar: boolean;
}

/** All that were read whole, the newest of each model first. */
export function checkableRevisions(models: readonly ModelSummary[]): CheckableRevision[] {
	const named = models.map((model) => {
		const ready = model.revisions.filter((revision) => revision.state === 'ready');
		return ready.map((revision, i) => ({ ...revision, modelName: model.name, isNewest: i === 0 }));
	});
	return [...named.flatMap((ready) => ready.slice(0, 1)), ...named.flatMap((ready) => ready.slice(1))];
}

/** What stands in the way of a check of this survey: model, survey, sheet, and each set-up that is not tied to the design. */
export function missingForCheck(given: {
	revisions: readonly CheckableRevision[];
	surveys: readonly SurveySummary[];
	sheets: readonly SheetSummary[];
	survey: SurveySummary | null;
}): Missing[] {
	const missing: Missing[] = [];
	if (given.revisions.length === 0) {
		missing.push({
			sentence: 'No model has been read: there is no design to check against.',
			path: 'model',
			word: 'To the model',
			isBar: true,
		});
	}
	if (given.surveys.every((survey) => survey.state !== 'ready')) {
		missing.push({ sentence: 'No survey is stored: nothing has been measured.', path: 'surveys', word: 'To the surveys', isBar: true });
	}
	if (given.sheets.every((sheet) => sheet.state !== 'issued')) {
		missing.push({
			sentence: 'No tolerance sheet is issued: nobody has said how far off is too far.',
			path: 'sheets',
			word: 'To the tolerance sheets',
			isBar: true,
		});
	}
	const { survey } = given;
	if (survey === null) return missing;
	const untied = survey.setups.filter((setup) => setup.adoptedFitId === null && setup.pointCount > 0);
	const isAll = untied.length === survey.setups.filter((setup) => setup.pointCount > 0).length;
	for (const setup of untied) {
		missing.push({
			sentence: `No adopted fit for set-up ${setup.name}: its ${setup.pointCount} points cannot be carried into the design.`,
			path: `surveys/${survey.surveyId}/setups/${setup.setupId}`,
			word: `Fit set-up ${setup.name}`,
			isBar: isAll,
		});
	}
	return missing;
}
