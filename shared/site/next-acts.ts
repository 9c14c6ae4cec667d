import type { CheckHead } from '../check/contract.ts';
import { mayWith, type Role, type SitePermission } from '../permissions.ts';
import type { SurveySummary } from '../survey/contract.ts';
import type { Line } from './contract.ts';

/** One thing to do: the verb on the button, where it begins, why. */
export interface NextAct {
	verb: string;
	/** Below /sites/:siteId/. */
	path: string;
	why: string;
	/** It should be done before the next concrete. */
	isBeforePour: boolean;
}

/** What the acts are told from; lists newest first, as the server gives them. */
export interface NextFacts {
	roles: readonly Role[];
	line: Line;
	surveys: readonly SurveySummary[];
	checks: readonly CheckHead[];
	pourCount: number;
}

/** What the site's own way asks of this person next, by its places: model, control, surveys, check, pours. Pure. */
export function nextActs(facts: NextFacts): NextAct[] {
	return [...beginnings(facts), ...surveyActs(facts), ...checkActs(facts), ...pourActs(facts)];
}

/** "1 flag", "6 flags". */
export function counted(value: number, one: string, many = `${one}s`): string {
	return `${value} ${value === 1 ? one : many}`;
}

function stateOf({ line }: NextFacts, knot: Line['knots'][number]['knot']) {
	return line.knots.find((candidate) => candidate.knot === knot)?.state ?? 'open';
}

function may(facts: NextFacts, permission: SitePermission): boolean {
	return mayWith(facts.roles, permission);
}

function beginnings(facts: NextFacts): NextAct[] {
	const acts: NextAct[] = [];
	if (may(facts, 'model.write')) {
		const model = stateOf(facts, 'model');
		if (model === 'open')
			acts.push({
				verb: 'Bring in the model',
				path: 'model',
				why: 'Nothing can be checked before there is a design.',
				isBeforePour: false,
			});
		if (model === 'half')
			acts.push({ verb: 'See to the model', path: 'model', why: 'Its newest revision is not read to the end.', isBeforePour: false });
	}
	if (may(facts, 'control.write') && stateOf(facts, 'control') === 'open') {
		acts.push({
			verb: 'Bring in the control',
			path: 'control',
			why: 'A survey is fitted to marks whose places are known; none are stored yet.',
			isBeforePour: false,
		});
	}
	return acts;
}

function surveyActs(facts: NextFacts): NextAct[] {
	if (!may(facts, 'survey.write')) return [];
	if (facts.surveys.length === 0) {
		return stateOf(facts, 'control') === 'open'
			? []
			: [
					{
						verb: 'Bring in a survey',
						path: 'surveys',
						why: 'The control is there; nothing is measured against it yet.',
						isBeforePour: true,
					},
				];
	}
	const [newest] = facts.surveys;
	if (newest === undefined) return [];
	if (newest.state === 'failed') {
		return [{ verb: `See survey ${newest.number}`, path: 'surveys', why: newest.reason ?? 'It could not be stored.', isBeforePour: true }];
	}
	if (newest.state !== 'ready') return [];
	const unfitted = newest.setups.filter((setup) => setup.adoptedFitId === null);
	const [first] = unfitted;
	if (first !== undefined) {
		return [
			{
				verb: `Fit set-up ${first.name}`,
				path: `surveys/${newest.surveyId}/setups/${first.setupId}`,
				why: `Survey ${newest.number}, ${newest.name}: ${unfitted.length} of ${counted(newest.setups.length, 'set-up')} ${unfitted.length === 1 ? 'stands' : 'stand'} on no adopted fit.`,
				isBeforePour: true,
			},
		];
	}
	const isChecked = facts.checks.some(
		(check) => check.survey.surveyId === newest.surveyId && check.state !== 'failed' && check.state !== 'withdrawn',
	);
	return isChecked || !may(facts, 'check.write')
		? []
		: [
				{
					verb: `Check survey ${newest.number}`,
					path: 'check',
					why: `${newest.name}: all its set-ups are fitted; nothing is judged yet.`,
					isBeforePour: true,
				},
			];
}

function checkActs(facts: NextFacts): NextAct[] {
	const check = facts.checks.find((candidate) => candidate.state === 'trial' || candidate.state === 'published');
	if (check === undefined) return [];
	const acts: NextAct[] = [];
	const newer = whatIsNewer(check);
	if (newer.length > 0 && may(facts, 'check.write')) {
		acts.push({
			verb: 'Check again',
			path: 'check',
			why: `Check ${check.number} stands on ${newer.join(', ')}, not the newest.`,
			isBeforePour: true,
		});
	}
	const off = offWords(check);
	acts.push({
		verb: `Look at check ${check.number}`,
		path: `checks/${check.checkId}`,
		why: off === '' ? 'All that was measured is within.' : `${off}.`,
		isBeforePour: off !== '',
	});
	return acts;
}

/** What of a check's grounds has a newer one. */
export function whatIsNewer(check: Pick<CheckHead, 'revision' | 'fits' | 'sheet'>): string[] {
	const old = check.fits.filter((fit) => !fit.isNewest).length;
	return [
		check.revision.isNewest ? '' : `rev ${check.revision.number}`,
		old === 0 ? '' : counted(old, 'older fit'),
		check.sheet.isNewest ? '' : `sheet ${check.sheet.name}, revision ${check.sheet.revision}`,
	].filter((word) => word !== '');
}

/** "6 outside, 9 too close to call, 14 not measured"; empty where all is within. */
export function offWords({ summary }: Pick<CheckHead, 'summary'>): string {
	const close = (summary['too-close-to-call'] ?? 0) + (summary.undecided ?? 0);
	return [
		summary.outside ? `${summary.outside} outside` : '',
		close ? `${close} too close to call` : '',
		summary['not-measured'] ? `${summary['not-measured']} not measured` : '',
		summary['no-tolerance'] ? `${summary['no-tolerance']} without a tolerance` : '',
	]
		.filter((word) => word !== '')
		.join(', ');
}

function pourActs(facts: NextFacts): NextAct[] {
	if (!may(facts, 'pour.write') || facts.pourCount > 0 || stateOf(facts, 'model') === 'open') return [];
	return [
		{
			verb: 'Plan a pour',
			path: 'pours',
			why: 'What is concreted together is judged together; no pour is planned yet.',
			isBeforePour: false,
		},
	];
}
