import type { ReportBlock } from '../../platform/pdf/report-blocks.ts';
import type { FitReportData } from './fit-report-data.ts';
import { checkedWords, facts, text } from './fit-report-sections.ts';
import { fixed, mmOf, momentIn, notStated, said } from './fit-report-words.ts';

/** Section 15: what was looked for, what changed, why it was adopted, how far it may be used. */
export function qualityBlocks({ fit }: FitReportData): ReportBlock[] {
	const { findings } = fit.result;
	const ofSetup = fit.pairs.findings ?? [];
	return [
		...ofSetup.map(({ message }) => text(`Of the set-up: ${message}`)),
		text(
			findings.length === 0
				? 'The engine’s search for blunders, exchanged labels, units, axes, scale, tilt, distance constant and weak geometry raised nothing.'
				: `${findings.length} ${findings.length === 1 ? 'finding stands' : 'findings stand'}:`,
		),
		...findings.map(({ message }) => text(`– ${message}`)),
		...(fit.changes.length > 0 ? [text(`Other than in the fit before it: ${fit.changes.join(' ')}`)] : []),
		text(`Adopted because: ${said(fit.adoptedReason)}`),
		text(
			'Not corrected: temperature of the structure (50 m at 20 K: 10 mm), shrinkage, creep, earth curvature and refraction (0.7 mm at 100 m). Uncertainty grows away from the targets; outside their span this fit should not be used without further targets.',
		),
	];
}

/** Section 16: what went in, and the hashes of the files. */
export function appendixBlocks({ fit, survey, control }: FitReportData): ReportBlock[] {
	return [
		{
			kind: 'table',
			caption: 'Observations as they went in, survey frame, m; standard deviations in mm',
			columns: [
				{ head: 'Target', share: 0.16 },
				{ head: 'x', share: 0.17, align: 'right' },
				{ head: 'y', share: 0.17, align: 'right' },
				{ head: 'z', share: 0.17, align: 'right' },
				{ head: 's.d. x / y / z', share: 0.33, align: 'right' },
			],
			rows: fit.pairs.pairs.map(({ name, survey: place, surveySigma }) => [
				name,
				...place.map((value) => fixed(value, 4)),
				surveySigma ? surveySigma.map((value) => mmOf(value, 2)).join(' / ') : '–',
			]),
		},
		facts([
			['Survey file', survey.fileName],
			['its SHA-256', survey.fileSha256],
			['Control file', control.fileName],
			['its SHA-256', control.fileSha256],
			['All inputs of this fit, SHA-256', fit.inputsSha256],
		]),
		text('Photos: none are kept with a fit.'),
	];
}

/** What every report carries, word for word. */
export const caution =
	'The result depends on the control, the survey and the design supplied. It supports and does not replace the judgement of the licensed surveyor and the engineer of record, and local codes and the contract govern. It is no statement about strength or safety.';

/** Section 17: who stands for it, and the caution. */
export function signatureBlocks({ fit, timeZone }: FitReportData): ReportBlock[] {
	const { surveyorInCharge: inCharge } = fit;
	return [
		{
			kind: 'table',
			caption: 'Prepared, checked, approved',
			columns: [
				{ head: '', share: 0.16 },
				{ head: 'Name', share: 0.26 },
				{ head: 'Role', share: 0.24 },
				{ head: 'Date', share: 0.2 },
				{ head: 'Signature', share: 0.14 },
			],
			rows: [
				['Prepared', fit.adoptedBy ?? fit.madeBy, 'site engineer', momentIn(fit.adoptedAt ?? fit.madeAt, timeZone), ''],
				[
					'Checked',
					fit.checkedBy ?? (fit.isSecondAsked ? 'nobody yet' : 'not asked on this site'),
					fit.checkedBy ? 'site engineer, second person' : '',
					fit.checkedAt ? momentIn(fit.checkedAt, timeZone) : '',
					'',
				],
				[
					'Approved',
					inCharge ? said(inCharge.name) : notStated,
					inCharge ? `surveyor in charge; licence ${said(inCharge.licence)}, ${said(inCharge.jurisdiction)}` : 'surveyor in charge',
					'',
					'',
				],
			],
		},
		...(fit.checkedBy === null
			? [{ kind: 'text' as const, text: `Second check: ${checkedWords({ fit, timeZone })}.`, isStrong: true }]
			: []),
		{ kind: 'text', text: caution, isStrong: true },
	];
}
