import type { ReportBlock } from '../../platform/pdf/report-blocks.ts';
import type { FitReportData } from './fit-report-data.ts';
import { fixed, signedMmOf } from './fit-report-words.ts';

/** That the fit rests on others, and through which targets. */
export function togetherBlocks({ network, madeWith, setupId }: FitReportData['fit']): ReportBlock[] {
	if (network === null || madeWith === null) return [];
	const others = madeWith.fits.filter((other) => other.setupId !== setupId);
	const nameOf = new Map(madeWith.fits.map((other) => [other.setupId, other.setupName]));
	return [
		{
			kind: 'text',
			text: `ADJUSTED TOGETHER with ${others.map(({ number, setupName }) => `fit ${number} of set-up ${setupName}`).join(', ')}: unknowns are the poses of all set-ups and the places of all marks, observations all sightings and all known marks (Mikhail & Gracie 1981). This fit rests on theirs; they are adopted and checked together. Degrees of freedom and the global test are those of all together.`,
		},
		{
			kind: 'table',
			caption: 'Targets of this set-up in the adjustment, mm: where it puts them less where all together put them',
			columns: [
				{ head: 'Target', share: 0.18 },
				{ head: 'Known', share: 0.14 },
				{ head: 'Seen by', share: 0.26 },
				{ head: 'E', share: 0.1, align: 'right' },
				{ head: 'N', share: 0.1, align: 'right' },
				{ head: 'H', share: 0.1, align: 'right' },
				{ head: 'Over its s.d.', share: 0.12, align: 'right' },
			],
			rows: network.ties.flatMap(({ mark, isKnown, setupIds, sightings }) =>
				sightings
					.filter((sighting) => sighting.setupId === setupId)
					.map(({ residual, normalised }) => [
						mark,
						isKnown ? 'control' : 'ties only',
						setupIds.map((id) => nameOf.get(id) ?? '').join(', '),
						...residual.map((value) => signedMmOf(value)),
						normalised === null ? '–' : fixed(normalised, 2),
					]),
			),
		},
	];
}
