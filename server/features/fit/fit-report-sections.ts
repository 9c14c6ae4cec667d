import { levelRunOf, levelRunWords } from '#shared/survey/level-run.ts';
import type { ReportBlock, ReportSection } from '../../platform/pdf/report-blocks.ts';
import type { FitReportData } from './fit-report-data.ts';
import { togetherBlocks } from './fit-report-together.ts';
import { fixed, kindSentences, mmOf, momentIn, notStated, said, saidNumber, stageSentences } from './fit-report-words.ts';

/** Sections 1 to 9 of a fit report: what was measured, by whom, with what and against what. Pure. */
export function givenSections(data: FitReportData): ReportSection[] {
	return [
		{ number: 1, title: 'Project and report', blocks: [facts(projectRows(data)), ...inventedNote(data)] },
		{
			number: 2,
			title: 'Purpose and scope',
			blocks: [
				text(
					`To tie set-up ${data.fit.setupName} of survey ${data.survey.number} to the design, so that what it measured can be held against the model. Stage: ${stageSentences[data.survey.stage] ?? data.survey.stage}.`,
				),
				text(`Not surveyed, and why: ${said(data.survey.observation?.notSurveyed)}`),
			],
		},
		{ number: 3, title: 'Persons', blocks: [facts(personRows(data))] },
		{ number: 4, title: 'Instruments', blocks: [facts(instrumentRows(data))] },
		{ number: 5, title: 'Weather and atmospheric correction', blocks: [facts(weatherRows(data))] },
		{ number: 6, title: 'Datum', blocks: [facts(datumRows(data))] },
		{ number: 7, title: 'Control used', blocks: [controlTable(data)] },
		{ number: 8, title: 'Control available but not used', blocks: unusedBlocks(data) },
		{ number: 9, title: 'Method', blocks: methodBlocks(data) },
	];
}

function projectRows({ fit, siteName, survey, timeZone, printedAt }: FitReportData): [string, string][] {
	return [
		['Project', siteName],
		['Report', `Fit ${fit.number}, ${fit.state === 'made' ? 'made, not adopted' : fit.state}`],
		['Covers', `survey ${survey.number} “${survey.name}”, set-up ${fit.setupName}; the pours that rest on it name it in their own records`],
		['Surveyed on', survey.surveyedOn],
		['Computed', momentIn(fit.madeAt, timeZone)],
		['Printed', momentIn(printedAt, timeZone)],
		['Where a field says "not stated"', 'it was left blank; nothing is assumed for it'],
	];
}

function inventedNote({ isInvented }: FitReportData): ReportBlock[] {
	return isInvented ? [{ kind: 'text', text: 'This site is invented: a demonstration, no real survey.', isStrong: true }] : [];
}

function personRows({ fit, survey, timeZone }: FitReportData): [string, string][] {
	const { surveyorInCharge: inCharge } = fit;
	return [
		['Observer', survey.observer],
		['Brought the survey', survey.storedBy],
		['Computed by', `${fit.madeBy}, ${momentIn(fit.madeAt, timeZone)}`],
		['Checked by', checkedWords({ fit, timeZone })],
		[
			'Surveyor in charge',
			inCharge ? `${said(inCharge.name)}; licence no. ${said(inCharge.licence)}; jurisdiction ${said(inCharge.jurisdiction)}` : notStated,
		],
	];
}

/** Who checked it, or what it means that nobody did. */
export function checkedWords({ fit, timeZone }: Pick<FitReportData, 'fit' | 'timeZone'>): string {
	if (fit.checkedBy !== null && fit.checkedAt !== null)
		return `${fit.checkedBy}, ${momentIn(fit.checkedAt, timeZone)}: ${said(fit.checkedNote)}`;
	return fit.isSecondAsked ? 'NOT CHECKED by a second person' : 'not checked: this site asks no second person';
}

function instrumentRows({ survey, setup }: FitReportData): [string, string][] {
	const { observation } = survey;
	const own = setup.observation;
	return [
		['Instrument', `${survey.instrument}, serial no. ${survey.serial}`],
		['Calibration', `certificate ${said(observation?.certificate)}, of ${said(observation?.calibratedOn)}`],
		['Prism', `${said(observation?.prismType)}; constant ${saidNumber(observation?.prismConstantMm, 'mm', 1)}`],
		['Instrument height', saidNumber(setup.instrumentHeightM, 'm', 3)],
		['Target height', saidNumber(own?.targetHeightM, 'm', 3)],
		['Field check before use', answerWords(observation?.fieldCheck, observation?.fieldCheckNote)],
		['Two faces', answerWords(observation?.twoFaces, observation?.twoFacesNote)],
		[
			'Closing sight to the first target',
			`${saidNumber(own?.closingMm, 'mm', 1)}; ${own?.closingArcSeconds === null || own?.closingArcSeconds === undefined ? notStated : `${fixed(own.closingArcSeconds, 0)} arc seconds`}`,
		],
		['Level run', levelWords(own)],
		['Remarks', [observation?.remarks, own?.remarks].filter(Boolean).join(' ') || notStated],
		['Software', 'Batterboard; the engine’s mathematics are in its docs/fit.md'],
	];
}

function levelWords(observation: FitReportData['setup']['observation']): string {
	const run = levelRunOf(observation);
	return run === null ? notStated : levelRunWords(run);
}

function answerWords(answer: string | undefined, note: string | undefined): string {
	const word = answer === 'yes' ? 'yes' : answer === 'no' ? 'no' : notStated;
	return note ? `${word}: ${note}` : word;
}

const ppmWords: Record<string, string> = {
	'in-instrument': 'applied in the instrument',
	afterwards: 'applied afterwards',
	'not-applied': 'not applied',
};

function weatherRows({ survey: { observation } }: FitReportData): [string, string][] {
	return [
		['Temperature', saidNumber(observation?.temperatureC, '°C', 1)],
		['Pressure', saidNumber(observation?.pressureHPa, 'hPa', 0)],
		['Wind', said(observation?.wind)],
		['Correction set', saidNumber(observation?.ppm, 'ppm', 1)],
		['Where it is applied (once only)', ppmWords[observation?.ppmApplied ?? ''] ?? notStated],
	];
}

function datumRows({ control, fit, mapConversion }: FitReportData): [string, string][] {
	const map = mapConversion;
	const turn = map ? (Math.atan2(map.xAxisOrdinate, map.xAxisAbscissa) * 180) / Math.PI : null;
	return [
		['Frame of the results', 'design frame: the model’s engineering coordinates, metres; X and Y in plan, Z up'],
		['Control given in', control.frame === 'map' ? 'map frame: easting, northing, orthogonal height' : 'design frame'],
		['Map reference system', map?.crsName ?? notStated],
		[
			'Design frame in the map',
			map
				? `origin E ${fixed(map.eastings * map.mapUnitM, 3)}, N ${fixed(map.northings * map.mapUnitM, 3)}, H ${fixed(map.orthogonalHeight * map.mapUnitM, 3)} m; turned by ${fixed(turn, 6)}° (the model’s IfcMapConversion)`
				: 'the model names no map',
		],
		['Horizontal and vertical datum', map?.crsName ? `of ${map.crsName}` : notStated],
		[
			'Grid/ground factor',
			fit.knownScale === null
				? '1 (none typed in)'
				: `${fit.knownScale}, typed in, held fixed, applied to ${fit.kind === 'free' ? 'all axes' : 'plan only'}`,
		],
	];
}

function controlTable({ fit, control, timeZone }: FitReportData): ReportBlock {
	const used = new Set(fit.result.pairs.map(({ name }) => name));
	return {
		kind: 'table',
		caption: `Control ${control.number} “${control.name}”, marks of this set-up; metres, standard deviations in mm`,
		columns: [
			{ head: 'Mark', share: 0.1 },
			{ head: 'E', share: 0.12, align: 'right' },
			{ head: 'N', share: 0.12, align: 'right' },
			{ head: 'H', share: 0.1, align: 'right' },
			{ head: 's.d. plan', share: 0.09, align: 'right' },
			{ head: 's.d. height', share: 0.1, align: 'right' },
			{ head: 'Type; set by, how', share: 0.23 },
			{ head: 'Verified; state', share: 0.14 },
		],
		rows: control.points
			.filter(({ name }) => used.has(name))
			.map((point) => [
				point.name,
				...point.designM.map((value) => fixed(value, 4)),
				mmOf(point.sigmaPlanM, 1),
				mmOf(point.sigmaHeightM, 1),
				[point.code, point.setBy, point.howSet].filter(Boolean).join('; ') || notStated,
				`${point.verifiedAt ? momentIn(point.verifiedAt, timeZone).slice(0, 10) : notStated}; ${point.state}`,
			]),
	};
}

function unusedBlocks({ fit, control }: FitReportData): ReportBlock[] {
	const used = new Set(fit.result.pairs.map(({ name }) => name));
	const shelvings = new Map(fit.shelves.map((shelving) => [shelving.name, shelving]));
	const sighted = new Set(fit.pairs.pairs.map(({ name }) => name));
	const rows = control.points
		.filter(({ name }) => !used.has(name))
		.map(({ name, state }) => {
			const shelving = shelvings.get(name);
			if (sighted.has(name))
				return [
					name,
					shelving?.shelf === 'set-aside'
						? `set aside: ${said(shelving.reason)}`
						: `used in part, which this fit cannot: ${said(shelving?.reason)}`,
				];
			return [name, state === 'in-use' ? 'not sighted from this set-up' : `not used: ${state}`];
		});
	if (rows.length === 0) return [text('None: every mark of the control was used.')];
	return [
		{
			kind: 'table',
			caption: 'Marks not in the fit and not held back',
			columns: [
				{ head: 'Mark', share: 0.15 },
				{ head: 'Reason', share: 0.85 },
			],
			rows,
		},
	];
}

function methodBlocks({ fit, setup }: FitReportData): ReportBlock[] {
	const isScaled = fit.kind.endsWith('-scaled');
	const weights =
		fit.result.sigmaGiven === false
			? `equal weights, since standard deviations were not known for all: ${said(fit.pairs.sigmaNote)}`
			: 'by the standard deviations of control and sightings';
	return [
		facts([
			['Instrument', setup.levelling === 'levelled' ? 'levelled: its Z is plumb' : 'free: no compensator'],
			['Fit', kindSentences[fit.kind]],
			['Scale', isScaled ? 'fitted' : fit.knownScale === null ? 'fixed at 1' : `fixed at ${fit.knownScale}`],
			['Weights', weights],
			[
				'Shared by all points of the set-up',
				`${fixed(setup.commonMm, 1)} mm (target height, prism constant, benchmark): no residual shows it`,
			],
		]),
		text(
			'Closed form first (weighted centroids and the singular value decomposition: Arun 1987, Horn 1987, Umeyama 1991; levelled: its counterpart in plan), then, with standard deviations, the exact errors-in-variables minimum (Gauss-Helmert: Pope 1972). Reliability after Baarda 1968.',
		),
		...togetherBlocks(fit),
		...exceptions(fit),
	];
}

/** What was put right by hand in what went in. */
function exceptions(fit: FitReportData['fit']): ReportBlock[] {
	const lines = [
		...fit.relabellings.map(({ target, mark, reason }) => `Target ${target} was taken for ${mark}. ${reason}`),
		...fit.shelves
			.filter(({ exchangedWith, name }) => exchangedWith && name < exchangedWith)
			.map(({ name, exchangedWith, reason }) => `The labels of ${name} and ${exchangedWith} were exchanged back: ${said(reason)}`),
		...fit.shelves
			.filter(({ use }) => use && use !== 'all')
			.map(({ name, use, reason }) => `${name} is used in ${use} only: ${said(reason)}`),
		...(fit.pairs.notes ?? []),
	];
	return lines.map(text);
}

export function text(said: string): ReportBlock {
	return { kind: 'text', text: said };
}

export function facts(rows: readonly (readonly [string, string])[]): ReportBlock {
	return { kind: 'facts', rows };
}
