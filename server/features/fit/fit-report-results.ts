import { coverageFactor, fitInflation } from '#shared/fit/carry-point.ts';
import type { FitPairResult } from '#shared/fit/fit-schema.ts';
import { fitUnknowns } from '#shared/fit/least-pairs.ts';
import type { ReportBlock, ReportSection } from '../../platform/pdf/report-blocks.ts';
import { appendixBlocks, qualityBlocks, signatureBlocks } from './fit-report-close.ts';
import type { FitReportData } from './fit-report-data.ts';
import { checkedPlaces } from './fit-report-places.ts';
import { planFigure } from './fit-report-plan.ts';
import { facts, text } from './fit-report-sections.ts';
import { fixed, mmOf, said, signedMmOf } from './fit-report-words.ts';

/** Sections 10 to 17 of a fit report: what came out, how good it is, and who stands for it. Pure. */
export function foundSections(data: FitReportData): ReportSection[] {
	return [
		{ number: 10, title: 'Parameters', blocks: [facts(parameterRows(data))] },
		{ number: 11, title: 'Residuals of each pair', blocks: residualBlocks(data) },
		{ number: 12, title: 'Held-back check pairs', blocks: heldBackBlocks(data) },
		{ number: 13, title: 'Global test', blocks: globalBlocks(data) },
		{ number: 14, title: 'Uncertainty at the measured places', blocks: [...placeBlocks(data), planFigure(data)] },
		{ number: 15, title: 'Quality: what was checked, and limits of use', blocks: qualityBlocks(data) },
		{ number: 16, title: 'Appendix: observations and files', blocks: appendixBlocks(data) },
		{ number: 17, title: 'Signatures and caution', blocks: signatureBlocks(data) },
	];
}

const unknownNames = ['shift E', 'shift N', 'shift H', 'turn about E', 'turn about N', 'turn about H', 'scale'] as const;

function parameterRows({ fit }: FitReportData): [string, string][] {
	const { result } = fit;
	const inflation = result.sigmaGiven === false ? Math.sqrt(result.varianceFactor ?? Number.NaN) : fitInflation(result);
	const sigmaOf = (unknown: number): number | null => {
		const at = fitUnknowns(result.fit).indexOf(unknown);
		const variance = result.parameterCovariance[at]?.[at];
		return variance === undefined ? null : inflation * Math.sqrt(variance);
	};
	const degrees = (radians: number | null) => (radians === null ? null : (radians * 180) / Math.PI);
	const yaw = degrees(Math.atan2(result.rotation[1][0], result.rotation[0][0]));
	const shift = result.shift ?? result.translation;
	const turn = sigmaOf(5);
	const rows: [string, string][] = [
		['Turn about the vertical', `${fixed(yaw, 6)}°, s.d. ${turn === null ? 'fixed' : `${fixed(degrees(turn), 6)}°`}`],
		[
			'Shift of the origin of the pairs',
			([0, 1, 2] as const)
				.map(
					(axis) =>
						`${['E', 'N', 'H'][axis]} ${fixed(shift[axis], 4)} m (s.d. ${sigmaOf(axis) === null ? 'fixed' : `${mmOf(sigmaOf(axis), 2)} mm`})`,
				)
				.join(', '),
		],
		['Origin of the pairs, survey frame', `${result.origin.map((value) => fixed(value, 4)).join(', ')} m`],
		[
			'Scale',
			`${fixed((result.scale - 1) * 1e6, 1)} ppm from 1, s.d. ${sigmaOf(6) === null ? 'fixed' : `${fixed((sigmaOf(6) ?? 0) * 1e6, 1)} ppm`}`,
		],
	];
	const tilt = degrees(Math.acos(Math.max(-1, Math.min(1, result.rotation[2][2]))));
	if (result.fit.startsWith('free'))
		rows.push([
			'Tilt of the instrument’s Z',
			`${fixed(tilt, 6)}°, s.d. about E ${fixed(degrees(sigmaOf(3)), 6)}°, about N ${fixed(degrees(sigmaOf(4)), 6)}°`,
		]);
	const estimated = fitUnknowns(result.fit).map((unknown) => unknownNames[unknown]);
	rows.push(['Unknowns', estimated.join(', ')]);
	return rows;
}

function residualBlocks({ fit }: FitReportData): ReportBlock[] {
	const shelvings = new Map(fit.shelves.map((shelving) => [shelving.name, shelving]));
	const aside = fit.shelves.filter(({ shelf }) => shelf === 'set-aside');
	const rows = fit.result.pairs
		.filter(({ heldBack }) => !heldBack)
		.map((pair) => [
			(shelvings.get(pair.name)?.use ?? 'all') === 'all' ? pair.name : `${pair.name} (${shelvings.get(pair.name)?.use} only)`,
			...pair.residual.map(signedMmOf),
			normalisedWords(pair),
			pair.redundancy === null ? '–' : fixed(pair.redundancy, 2),
			mmOf(pair.smallestBlunder, 1),
			pair.leaveOneOut ? pair.leaveOneOut.map(signedMmOf).join(' / ') : '–',
		]);
	return [
		text(
			'Residual: where the fit puts the target, less its mark; + is east, north, high. Normalised: the largest of the pair’s axes over its s.d.; beyond the critical value it is marked *.',
		),
		{
			kind: 'table',
			caption: `Pairs in the fit, mm; rms ${mmOf(fit.result.rms, 1)} mm (root mean square of the lengths)`,
			columns: [
				{ head: 'Pair', share: 0.16 },
				{ head: 'E', share: 0.09, align: 'right' },
				{ head: 'N', share: 0.09, align: 'right' },
				{ head: 'H', share: 0.09, align: 'right' },
				{ head: 'Normalised', share: 0.13, align: 'right' },
				{ head: 'Redundancy', share: 0.12, align: 'right' },
				{ head: 'Smallest blunder shown', share: 0.12, align: 'right' },
				{ head: 'Left out: E / N / H', share: 0.2, align: 'right' },
			],
			rows,
		},
		...(aside.length === 0
			? [text('Set aside: nothing.')]
			: [
					{
						kind: 'table' as const,
						caption: `Set aside by ${fit.madeBy}`,
						columns: [
							{ head: 'Pair', share: 0.16 },
							{ head: 'Reason', share: 0.84 },
						],
						rows: aside.map(({ name, reason }) => [name, said(reason)]),
					},
				]),
	];
}

function normalisedWords({ normalised, critical }: FitPairResult): string {
	if (normalised === null || critical === null) return '–';
	return `${fixed(normalised, 2)}${normalised > critical ? '*' : ''} of ${fixed(critical, 2)}`;
}

function heldBackBlocks({ fit }: FitReportData): ReportBlock[] {
	const held = fit.result.pairs.filter(({ heldBack }) => heldBack);
	if (held.length === 0)
		return [
			{
				kind: 'text',
				text: 'No independent check: no pair was held back. The residuals above are no acceptance evidence.',
				isStrong: true,
			},
		];
	return [
		text('These pairs are not in the fit: they are the acceptance evidence. Misfit over its s.d. (fit included) is held against 3.29.'),
		{
			kind: 'table',
			caption: 'Held back, mm',
			columns: [
				{ head: 'Pair', share: 0.16 },
				{ head: 'E', share: 0.1, align: 'right' },
				{ head: 'N', share: 0.1, align: 'right' },
				{ head: 'H', share: 0.1, align: 'right' },
				{ head: 's.d. E / N / H', share: 0.22, align: 'right' },
				{ head: 'Misfit over s.d.', share: 0.16, align: 'right' },
				{ head: 'Agrees', share: 0.16 },
			],
			rows: held.map((pair) => [
				pair.name,
				...pair.residual.map(signedMmOf),
				pair.sigma ? pair.sigma.map((value) => mmOf(value, 1)).join(' / ') : '–',
				normalisedWords(pair),
				pair.normalised === null ? 'not known' : pair.normalised > (pair.critical ?? 3.29) ? 'NO' : 'yes',
			]),
		},
	];
}

function globalBlocks({ fit }: FitReportData): ReportBlock[] {
	const { redundancy, varianceFactor, chiSquare } = fit.result;
	const rows: [string, string][] = [['Degrees of freedom', redundancy === 0 ? '0: the residuals prove nothing' : String(redundancy)]];
	if (chiSquare && varianceFactor !== null) {
		rows.push(['Variance factor', fixed(varianceFactor, 3)]);
		rows.push([
			'Weighted sum of squares',
			`${fixed(chiSquare.statistic, 2)}; 95 % lies between ${fixed(chiSquare.lower, 2)} and ${fixed(chiSquare.upper, 2)} (chi-square)`,
		]);
		const high = chiSquare.statistic > chiSquare.upper;
		rows.push([
			'Test',
			chiSquare.passes
				? 'passed'
				: high
					? 'FAILED, more misfit than the standard deviations allow: uncertainties of the fit are multiplied by the root of the variance factor'
					: 'FAILED, less misfit than the standard deviations say: are they too large, or was the control made from this survey?',
		]);
		if (!chiSquare.passes) rows.push(['Reason for use', said(fit.adoptedReason)]);
	} else rows.push(['Test', 'not possible: no standard deviations were given, so the scatter itself is the measure of the fit']);
	return [facts(rows)];
}

function placeBlocks(data: FitReportData): ReportBlock[] {
	const factor = coverageFactor(data.fit.result);
	const places = checkedPlaces(data);
	if (factor === null || places === null) return [text('Not known: no standard deviations, and no pair to spare.')];
	if (places.rows.length === 0) return [text('The set-up measured nothing but targets.')];
	return [
		text(
			`U = k·u with k = ${fixed(factor, 2)} (95 %), blunders excluded: the fit, the instrument’s single shot and what the set-up’s points share (${fixed(data.setup.commonMm, 1)} mm) together. ${places.pointNote}`,
		),
		{
			kind: 'table',
			caption: `Of ${data.measuredCount} places measured from this set-up; plan along the long axis`,
			columns: [
				{ head: 'Place', share: 0.28 },
				{ head: 'E, m', share: 0.14, align: 'right' },
				{ head: 'N, m', share: 0.14, align: 'right' },
				{ head: 'H, m', share: 0.12, align: 'right' },
				{ head: 'U plan, mm', share: 0.16, align: 'right' },
				{ head: 'U height, mm', share: 0.16, align: 'right' },
			],
			rows: places.rows,
		},
	];
}
