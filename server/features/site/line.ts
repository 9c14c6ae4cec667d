import type { CheckSummary } from '#shared/check/check-schema.ts';
import type { Line } from '#shared/site/contract.ts';

/** What the line is told from. Read by `read-line-facts.ts`. */
export interface LineFacts {
	/** The newest revision's state and number, one for each model. */
	models: { state: 'reading' | 'ready' | 'failed' | 'cancelled'; number: number }[];
	/** Points of the newest control set; null without one. */
	markCount: number | null;
	surveyCount: number;
	/** Of the newest survey: all its points stored, and each set-up carried by an adopted fit. */
	isNewestSurveyFitted: boolean;
	newestCheck: {
		checkId: string;
		number: number;
		state: 'computing' | 'trial' | 'published';
		/** Null while computing, and for who sees only the pours of a company: the counts are the whole site's. */
		summary: CheckSummary | null;
		/** Everything it rests on is still the newest. */
		restsOnNewest: boolean;
	} | null;
	/** Those the member may see that have not lapsed: still to be settled, and closed. */
	flags: { open: number; closed: number };
	/** Of the site's whole chain: its length is no secret, it stands in every mail. */
	recordCount: number;
	/** Those the member may see. */
	pours: { state: 'planned' | 'concreting' | 'cast' | 'cast-in-part'; plannedAt: Date | null }[];
}

type Knot = Omit<Line['knots'][number], 'knot'>;

/** The state of a site's seven places with one figure each, by the site's clock. */
export function lineOf(facts: LineFacts, now: Date, timeZone: string): Line {
	const { newestCheck } = facts;
	return {
		knots: [
			{ knot: 'model', ...modelKnot(facts.models) },
			{ knot: 'control', ...controlKnot(facts.markCount) },
			{ knot: 'surveys', ...surveyKnot(facts) },
			{ knot: 'check', ...checkKnot(newestCheck) },
			{ knot: 'flags', ...flagKnot(facts.flags) },
			{ knot: 'pours', ...pourKnot(facts.pours, now, timeZone) },
			{ knot: 'records', ...recordKnot(facts.recordCount) },
		],
		newestCheckId: newestCheck?.checkId ?? null,
		isTaut: newestCheck?.restsOnNewest ?? true,
	};
}

function modelKnot(models: LineFacts['models']): Knot {
	const [only] = models;
	if (only === undefined) return { state: 'open', figure: '' };
	const state = models.every((model) => model.state === 'ready') ? 'solid' : 'half';
	return { state, figure: models.length === 1 ? `rev ${only.number}` : `${models.length} models` };
}

function controlKnot(markCount: number | null): Knot {
	if (markCount === null) return { state: 'open', figure: '' };
	return { state: 'solid', figure: counted(markCount, 'mark') };
}

function surveyKnot({ surveyCount, isNewestSurveyFitted }: LineFacts): Knot {
	if (surveyCount === 0) return { state: 'open', figure: '' };
	return { state: isNewestSurveyFitted ? 'solid' : 'half', figure: String(surveyCount) };
}

function checkKnot(check: LineFacts['newestCheck']): Knot {
	if (check === null) return { state: 'open', figure: '' };
	const state = check.state === 'published' ? 'solid' : 'half';
	if (check.state === 'computing') return { state, figure: 'computing' };
	if (check.summary === null) return { state, figure: `no. ${check.number}` };
	return { state, figure: check.summary.outside > 0 ? `${check.summary.outside} outside` : `${check.summary.within} within` };
}

function flagKnot({ open, closed }: LineFacts['flags']): Knot {
	if (open + closed === 0) return { state: 'open', figure: '' };
	return open === 0 ? { state: 'solid', figure: 'all closed' } : { state: 'half', figure: `${open} open` };
}

function pourKnot(pours: LineFacts['pours'], now: Date, timeZone: string): Knot {
	if (pours.length === 0) return { state: 'open', figure: '' };
	const state = pours.every((pour) => pour.state === 'cast') ? 'solid' : 'half';
	const coming = pours
		.flatMap(({ state, plannedAt }) => (state === 'planned' && plannedAt !== null && plannedAt >= now ? [plannedAt.getTime()] : []))
		.sort((a, b) => a - b)[0];
	return { state, figure: coming === undefined ? counted(pours.length, 'pour') : `next ${hourText(new Date(coming), now, timeZone)}` };
}

function recordKnot(count: number): Knot {
	return count === 0 ? { state: 'open', figure: '' } : { state: 'solid', figure: String(count) };
}

const sixDaysMs = 6 * 24 * 3_600_000;

/** "Thu 07:00" within six days, "11 Dec 07:00" after, by the site's clock. */
function hourText(when: Date, now: Date, timeZone: string): string {
	const isNear = when.getTime() - now.getTime() < sixDaysMs;
	const day = new Intl.DateTimeFormat('en-GB', isNear ? { weekday: 'short', timeZone } : { day: 'numeric', month: 'short', timeZone });
	const hour = new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', hourCycle: 'h23', timeZone });
	return `${day.format(when)} ${hour.format(when)}`;
}

function counted(count: number, noun: string): string {
	return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
