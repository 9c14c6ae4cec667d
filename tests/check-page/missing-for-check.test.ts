import { describe, expect, it } from 'vitest';
import type { SurveySummary } from '#shared/survey/contract.ts';
import type { SheetSummary } from '#shared/tolerance/contract.ts';
import { type CheckableRevision, checkableRevisions, missingForCheck } from '#src/pages/checks/missing-for-check.ts';

const setup = (name: string, adoptedFitId: string | null) => ({ setupId: `setup-${name}`, name, adoptedFitId, pointCount: 20 });
const survey = (...setups: ReturnType<typeof setup>[]) => ({ surveyId: 'survey-1', state: 'ready', setups }) as unknown as SurveySummary;
const sheet = { state: 'issued' } as SheetSummary;
const revision = { revisionId: 'r' } as CheckableRevision;
const missing = (given: SurveySummary) => missingForCheck({ revisions: [revision], surveys: [given], sheets: [sheet], survey: given });

describe('what a check lacks', () => {
	it('is nothing where every set-up is tied to the design', () => {
		expect(missing(survey(setup('S1', 'fit'), setup('S2', 'fit')))).toEqual([]);
	});

	it('names each set-up without an adopted fit, and bars the check only where none has one', () => {
		const [one] = missing(survey(setup('S1', 'fit'), setup('S2', null)));
		expect(one).toEqual({
			sentence: 'No adopted fit for set-up S2: its 20 points cannot be carried into the design.',
			path: 'surveys/survey-1/setups/setup-S2',
			word: 'Fit set-up S2',
			isBar: false,
		});
		expect(missing(survey(setup('S1', null), setup('S2', null))).map(({ isBar }) => isBar)).toEqual([true, true]);
	});

	it('says that model, survey or sheet are not there, each with the page that helps', () => {
		const found = missingForCheck({ revisions: [], surveys: [], sheets: [{ state: 'draft' } as SheetSummary], survey: null });
		expect(found.map(({ path, isBar }) => [path, isBar])).toEqual([
			['model', true],
			['surveys', true],
			['sheets', true],
		]);
	});

	it('offers the newest read revision of each model first', () => {
		const ready = (id: string, number: number, state = 'ready') => ({ revisionId: id, number, state });
		const models = [
			{ modelId: 'm', name: 'Structure', revisions: [ready('s3', 3, 'reading'), ready('s2', 2), ready('s1', 1)] },
			{ modelId: 'n', name: 'Steel', revisions: [ready('t1', 1)] },
		] as unknown as Parameters<typeof checkableRevisions>[0];
		expect(checkableRevisions(models).map((each) => [each.revisionId, each.isNewest])).toEqual([
			['s2', true],
			['t1', true],
			['s1', false],
		]);
	});
});
